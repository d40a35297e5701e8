import type { GainCrossing } from './crossings.js';
import type { FrequencySweep } from './frequency_sweep.js';

/**
 * Whether the loop L(s)·e^{−s·deadTime} is stable when closed, from the loop without the dead time: as the dead time
 * grows, pairs of poles cross the imaginary axis only at frequencies where |L| is one, to the right where |L| falls
 * with frequency and to the left where it rises (Walton and Marshall, 1987).
 * @param sweep of L without the dead time.
 * @param crossings all gain crossings of L.
 * @param unstablePoles number of closed-loop poles right of or on the imaginary axis without the dead time.
 * @param feedthrough L at infinite frequency; with |feedthrough| ≥ 1 no dead time is stable.
 * @param deadTime s, positive.
 */
export function staysStableWithDeadTime(
  sweep: FrequencySweep,
  crossings: readonly GainCrossing[],
  unstablePoles: number,
  feedthrough: number,
  deadTime: number,
): boolean {
  if (Math.abs(feedthrough) >= 1) return false;
  let unstable = unstablePoles;
  const parts = new Float64Array(8);
  for (const { frequency, phaseMargin } of crossings) {
    const lag = phaseMargin < 0 ? phaseMargin + 2 * Math.PI : phaseMargin;
    const passages = Math.floor((frequency * deadTime - lag) / (2 * Math.PI)) + 1;
    if (passages <= 0) continue;
    sweep.transfer.evaluateWithSlope(frequency, parts);
    unstable += 2 * passages * (gainSlope(parts) < 0 ? 1 : -1);
  }
  return unstable === 0;
}

/** A number with the sign of d|L|/dω. */
function gainSlope(p: Float64Array): number {
  const above = (p[6] * p[2] + p[7] * p[3]) / (p[2] * p[2] + p[3] * p[3]);
  return above - (p[4] * p[0] + p[5] * p[1]) / (p[0] * p[0] + p[1] * p[1]);
}
