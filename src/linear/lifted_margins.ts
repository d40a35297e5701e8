import type { Complex } from './complex.js';
import { magnitude } from './complex.js';
import { GainLoci } from './gain_loci.js';
import { largestGain } from './largest_gain.js';
import { smallestDelay } from './lifted_delay.js';
import { liftedResponse, liftedSensitivity } from './lifted_response.js';
import { BALANCED, COMPLEMENTARY } from './loop_response.js';
import { type GainMargin, gainMarginOf } from './margins.js';
import { modesOf } from './modes.js';
import { polesOf, stabilityReserve } from './poles.js';
import type { StateEquations } from './state_equations.js';

export { liftedSensitivity } from './lifted_response.js';

/** The margins of a loop whose signal changes several times in a cycle. As `LoopMargins`, an unstable loop has none. */
export interface LiftedMargins {
  /** Whether all eigenvalues of the closed loop over one cycle (Floquet 1883) lie inside the unit circle. */
  stable: boolean;
  /** By which factors every change of the signal may be multiplied alike. */
  gainMargin: GainMargin;
  /** Smallest φ in rad for which e^{jφ} on every change of the signal brings the loop to the edge of stability. */
  phaseMargin: number;
  /** Smallest delay in s of all changes of the signals that brings the loop to the edge of stability; see `smallestDelay`. */
  delayMargin: number;
  /** 1/‖S‖∞: by how much the returned may differ from what it is, over energy, whatever changes at whatever instant. */
  modulusMargin: number;
  /** ‖S‖∞ with S = (I + L)⁻¹: the largest ratio of energies over all signals. */
  sensitivityPeak: number;
  /** ‖L(I + L)⁻¹‖∞ */
  complementaryPeak: number;
  /** 1/‖S − I/2‖∞, the balanced disc margin. */
  discMargin: number;
  /** Decay rate of the slowest mode, 1/s. */
  decayRate: number;
}

/**
 * The margins of a lifted sampled loop transfer L with K inputs and K outputs, exact: with a scalar c on every change of
 * the signal the loop is at the edge of stability where an eigenvalue of L is −1/c, so gain and phase margins are read from
 * the loci of the eigenvalues; peaks are the largest singular values of the closed loop over frequency. Each is worked out
 * when it is asked for, since loci and peaks take long.
 * @param signals how many signals the inputs are the changes of; a delay margin asks that all change equally often.
 * @throws NumericFailure when the loop cannot be closed or an entry is not finite.
 */
export function liftedMargins(loop: StateEquations, signals = 1): LiftedMargins {
  const sensitivity = liftedSensitivity(loop);
  const poles = polesOf(sensitivity.a, loop.period);
  const decayRate = modesOf(sensitivity.a, loop.period)[0]?.decayRate ?? Number.POSITIVE_INFINITY;
  if (!(stabilityReserve(poles, loop.period) > 0)) return { ...unstable, decayRate };
  const features = [...poles, ...polesOf(loop.a, loop.period)];
  const loci = once(() => new GainLoci(sensitivity, features));
  const margins = {
    gainMargin: once(() => gainMarginOf(negativeCrossings(loci()))),
    phaseMargin: once(() => smallestPhase(loci())),
    delayMargin: once(() => smallestDelay(loop, loci(), signals)),
    sensitivityPeak: once(() => largestGain(sensitivity).value),
    complementaryPeak: once(() => largestGain(liftedResponse(loop, COMPLEMENTARY)).value),
    discMargin: once(() => 1 / largestGain(liftedResponse(loop, BALANCED)).value),
  };
  return {
    stable: true,
    decayRate,
    get gainMargin() {
      return margins.gainMargin();
    },
    get phaseMargin() {
      return margins.phaseMargin();
    },
    get delayMargin() {
      return margins.delayMargin();
    },
    get modulusMargin() {
      return 1 / margins.sensitivityPeak();
    },
    get sensitivityPeak() {
      return margins.sensitivityPeak();
    },
    get complementaryPeak() {
      return margins.complementaryPeak();
    },
    get discMargin() {
      return margins.discMargin();
    },
  };
}

/** Works a value out when it is first asked for. */
function once<T>(work: () => T): () => T {
  let result: { value: T } | undefined;
  return () => {
    result ??= { value: work() };
    return result.value;
  };
}

const unstable = {
  stable: false,
  gainMargin: { up: 1, down: 1, ratio: 1 },
  phaseMargin: 0,
  delayMargin: 0,
  modulusMargin: 0,
  sensitivityPeak: Number.POSITIVE_INFINITY,
  complementaryPeak: Number.POSITIVE_INFINITY,
  discMargin: 0,
};

/** Beyond this gain, or below one over it, the sign of a small part is rounding and nothing counts as a crossing. */
const largestCounted = 1e8;
/** At zero frequency and half the frequency of the cycle a value with so small an imaginary part, as a share, is real. */
const realShare = 1e-9;

function negativeCrossings(loci: GainLoci): { factor: number }[] {
  const crossed = loci.steps
    .filter(({ from, to }) => from.value.imaginary * to.value.imaginary < 0)
    .filter(({ from, to }) => from.value.real < 0 || to.value.real < 0)
    .map((step) => loci.zeroWithin(step, ({ imaginary }) => imaginary).value);
  const atEnds = loci.ends
    .flatMap(({ values }) => values)
    .filter(({ real, imaginary }) => Math.abs(imaginary) <= realShare * Math.abs(real));
  return [...crossed, ...atEnds].filter(({ real }) => real < 0).flatMap(counted);
}

function counted(value: Complex): { factor: number }[] {
  const factor = 1 / magnitude(value);
  return factor < largestCounted && factor > 1 / largestCounted ? [{ factor }] : [];
}

function smallestPhase(loci: GainLoci): number {
  const phases = loci
    .ofSizeOne()
    .map(({ value: { real, imaginary } }) => Math.abs(Math.atan2(-imaginary, -real)));
  return Math.min(Number.POSITIVE_INFINITY, ...phases);
}
