import type { Complex } from './complex.js';
import { eigenvalues } from './eigenvalues.js';
import { add, identity, type Matrix } from './matrix.js';

/**
 * The eigenvalues of a state matrix; for a sampled system each less one, z − 1, which keeps the digits of slow poles.
 * @param period sampling period in s, or undefined for a continuous system.
 */
export function polesOf(a: Matrix, period: number | undefined): Complex[] {
  return eigenvalues(period === undefined ? a : add(a, identity(a.rows), -1));
}

/**
 * Whether all poles lie inside the boundary of stability. A pole nearer to it than the rounding of its computation counts as
 * lying on it, so that an integrator which no loop closes is never taken for stable.
 * @param poles as `polesOf` gives them.
 */
export function areStable(poles: readonly Complex[], period: number | undefined): boolean {
  const largest = Math.max(0, ...poles.map(({ real, imaginary }) => Math.hypot(real, imaginary)));
  return stabilityReserve(poles, period) > 8 * poles.length * Number.EPSILON * largest;
}

/** How far the poles are inside the boundary of stability: −Re s, or 1 − |z| for poles given as z − 1. Positive when stable. */
export function stabilityReserve(poles: readonly Complex[], period: number | undefined): number {
  let least = Number.POSITIVE_INFINITY;
  for (const { real, imaginary } of poles) {
    const reserve = period === undefined ? -real : oneLessModulus(real, imaginary);
    least = Math.min(least, reserve);
  }
  return least;
}

/** 1 − |1 + x| for complex x, without loss of digits for small x. */
function oneLessModulus(real: number, imaginary: number): number {
  const excess = 2 * real + real * real + imaginary * imaginary;
  return -excess / (1 + Math.sqrt(1 + excess));
}

/** The frequency in rad/s on the boundary of stability that is nearest to a pole, by its angle. @param pole as `polesOf` gives it. */
export function frequencyNear({ real, imaginary }: Complex, period: number | undefined): number {
  return period === undefined ? Math.abs(imaginary) : Math.abs(Math.atan2(imaginary, 1 + real)) / period;
}
