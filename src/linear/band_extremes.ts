import { sensitivityOf } from './closed_loop.js';
import { prepareLoopLevels } from './loop_levels.js';
import type { LoopResponse } from './loop_response.js';
import type { Peak } from './peak.js';
import { frequencyNear, polesOf } from './poles.js';
import { type Band, type GainProbe, polished, provenPeak } from './proven_peak.js';
import { expectSingle } from './response.js';
import { rootBetween } from './root_finding.js';
import type { StateEquations } from './state_equations.js';
import { prepareTransfer } from './transfer.js';

/**
 * The largest or the smallest size of a response of a loop transfer L over a band of frequencies, its ends included, proved
 * to a share of 1e-10 by the frequencies at which the size is a level (see `provenPeak`). A size below 1e-13 counts as zero,
 * one above 1e13 as without bound.
 * @param response `LOOP_GAIN`, or a closed-loop response.
 * @param band rad/s, up to half the sampling frequency.
 * @throws RangeError for several inputs or outputs, NumericFailure when the loop cannot be closed or a search meets its cap.
 */
export function extremeOverBand(
  loop: StateEquations,
  response: LoopResponse,
  which: 'largest' | 'smallest',
  band: Band,
): Peak {
  expectSingle(loop);
  const sensitivity = sensitivityOf(loop);
  const probe = probeOf(loop, response, which);
  const near = polesOf(sensitivity.a, loop.period).map((pole) => frequencyNear(pole, loop.period));
  const within = near.filter((frequency) => frequency > band.low && frequency < band.high);
  const start = [band.low, band.high, ...within]
    .map((frequency) => ({ value: probe.gainAt(frequency), frequency }))
    .reduce((best, peak) => (peak.value > best.value ? peak : best));
  const levels = prepareLoopLevels(sensitivity, response);
  const levelsOf = which === 'largest' ? levels : (gain: number) => levels(1 / gain);
  const found = polished(
    band.low < band.high ? provenPeak(levelsOf, start, probe, band) : start,
    probe,
    band,
  );
  return which === 'largest' ? found : { ...found, value: 1 / found.value };
}

/** The response looked at; where its smallest size is sought, one over it. */
function probeOf(loop: StateEquations, response: LoopResponse, which: 'largest' | 'smallest'): GainProbe {
  const transfer = prepareTransfer(loop);
  const parts = new Float64Array(8);
  const sign = which === 'largest' ? 1 : -1;
  const gainAt = (frequency: number): number => {
    transfer.evaluate(frequency, parts);
    return sizeOf(parts, response) ** sign;
  };
  const slopeAt = (frequency: number): number => {
    transfer.evaluateWithSlope(frequency, parts);
    return sign * slopeOf(parts, response);
  };
  return {
    gainAt,
    peakBetween(left, right) {
      if (!(slopeAt(left) > 0 && slopeAt(right) < 0)) return undefined;
      const frequency = rootBetween(slopeAt, left, right);
      return { value: gainAt(frequency), frequency };
    },
  };
}

function sizeOf(p: Float64Array, { loopWeight, unitWeight, open }: LoopResponse): number {
  const top = Math.hypot(loopWeight * p[2] + unitWeight * p[0], loopWeight * p[3] + unitWeight * p[1]);
  return top / (open ? Math.hypot(p[0], p[1]) : Math.hypot(p[0] + p[2], p[1] + p[3]));
}

/**
 * A number with the sign of the slope of the size, Re(top′/top − bottom′/bottom), multiplied by the squares of both: it has
 * no pole where the response is zero.
 */
function slopeOf(p: Float64Array, { loopWeight, unitWeight, open }: LoopResponse): number {
  const top = (at: number): number => loopWeight * p[at + 2] + unitWeight * p[at];
  const bottom = (at: number): number => (open ? p[at] : p[at] + p[at + 2]);
  return turn(top) * square(bottom) - turn(bottom) * square(top);
}

/** Re(z̄·z′), from a number's parts at 0 and 1 and its slope's at 4 and 5. */
function turn(part: (at: number) => number): number {
  return part(0) * part(4) + part(1) * part(5);
}

function square(part: (at: number) => number): number {
  return part(0) * part(0) + part(1) * part(1);
}
