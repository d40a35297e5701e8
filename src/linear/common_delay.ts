import type { Complex } from './complex.js';
import { magnitude } from './complex.js';
import { GainLoci } from './gain_loci.js';
import { liftedSensitivity } from './lifted_margins.js';
import { NumericFailure } from './numeric_failure.js';
import { polesOf } from './poles.js';
import type { StateEquations } from './state_equations.js';

/** At half the sampling frequency a value with so small an imaginary part, as a share, is real. */
const realShare = 1e-9;

/**
 * The smallest delay τ in s of several signals alike that brings the loop to the edge of stability, where each of them changes
 * once in a cycle of length T: e^{−jωτ} on all of them turns every eigenvalue of L, so that it is the smallest ψ/ω over all
 * eigenvalues of size one, ψ being the angle by which they are ahead of −1, from 0 to 2π. At half the sampling frequency,
 * where a sine is its own image and turned both ways, cos(πτ/T) is left of a real eigenvalue.
 * @param loop L of a stable closed loop.
 * @param signals how many signals there are.
 * @throws NumericFailure when some of them change more than once in a cycle, or the loop cannot be closed.
 */
export function smallestCommonDelay(loop: StateEquations, signals: number): number {
  const { a, b, period } = loop;
  if (b.columns > signals) {
    throw new NumericFailure(
      `the ${signals} opened signals change ${b.columns} times together in a cycle of all controllers, and one delay of them all turns their changes differently; open the loop at signals that all change once in a cycle, or at one of them`,
    );
  }
  const sensitivity = liftedSensitivity(loop);
  const features = [...polesOf(sensitivity.a, period), ...polesOf(a, period)];
  const loci = new GainLoci(sensitivity, features);
  const excess = (value: Complex): number => magnitude(value) - 1;
  const inside = loci.steps
    .filter(({ from, to }) => excess(from.value) * excess(to.value) < 0)
    .map((step) => loci.zeroWithin(step, excess))
    .map(({ frequency, value }) => aheadOfEdge(value) / frequency);
  const atEnd = loci.ends[loci.ends.length - 1].values
    .filter(({ real, imaginary }) => Math.abs(real) >= 1 && Math.abs(imaginary) <= realShare * Math.abs(real))
    .map(({ real }) => (Math.acos(-1 / real) * period!) / Math.PI);
  return Math.min(Number.POSITIVE_INFINITY, ...inside, ...atEnd);
}

/** The angle from −1 on to a value, from 0 to 2π. */
function aheadOfEdge({ real, imaginary }: Complex): number {
  const angle = Math.atan2(-imaginary, -real);
  return angle < 0 ? angle + 2 * Math.PI : angle;
}
