import type { Complex } from './complex.js';
import type { GainLoci } from './gain_loci.js';

/** At half the sampling frequency a value with so small an imaginary part, as a share, is real. */
const realShare = 1e-9;

/**
 * The smallest delay τ in s of several signals alike that brings the loop to the edge of stability, where each of them changes
 * once in a cycle of length T: e^{−jωτ} on all of them turns every eigenvalue of L, so that it is the smallest ψ/ω over all
 * eigenvalues of size one, ψ being the angle by which they are ahead of −1, from 0 to 2π. At half the sampling frequency,
 * where a sine is its own image and turned both ways, cos(πτ/T) is left of a real eigenvalue.
 * @param loci of L.
 * @param period T, s.
 */
export function smallestCommonDelay(loci: GainLoci, period: number): number {
  const inside = loci.ofSizeOne().map(({ frequency, value }) => aheadOfEdge(value) / frequency);
  const atEnd = loci.ends[loci.ends.length - 1].values
    .filter(({ real, imaginary }) => Math.abs(real) >= 1 && Math.abs(imaginary) <= realShare * Math.abs(real))
    .map(({ real }) => (Math.acos(-1 / real) * period) / Math.PI);
  return Math.min(Number.POSITIVE_INFINITY, ...inside, ...atEnd);
}

/** The angle from −1 on to a value, from 0 to 2π. */
function aheadOfEdge({ real, imaginary }: Complex): number {
  const angle = Math.atan2(-imaginary, -real);
  return angle < 0 ? angle + 2 * Math.PI : angle;
}
