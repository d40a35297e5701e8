import type { Dimension } from './spec.js';

/** Base units in the order of a dimension's exponents. */
export const baseUnits = ['m', 'kg', 's', 'A', 'K', 'mol', 'cd', 'cycle'] as const;

/** The dimension of numbers without a unit: ratios, shares, angles in radians. */
export const plainNumber: Dimension = [0, 0, 0, 0, 0, 0, 0, 0];

/** Time, in s. */
export const timeDimension: Dimension = [0, 0, 1, 0, 0, 0, 0, 0];

/** A frequency in cycle/s (Hz), which is not an angular frequency. */
export const frequencyDimension: Dimension = [0, 0, -1, 0, 0, 0, 0, 1];

/** A rate or an angular frequency, in 1/s (rad/s). */
export const rateDimension: Dimension = [0, 0, -1, 0, 0, 0, 0, 0];

/** The dimension of a product: exponents added. */
export function productOf(a: Dimension, b: Dimension): Dimension {
  return a.map((exponent, at) => clean(exponent + b[at]));
}

/** The dimension of a quotient: exponents subtracted. */
export function quotientOf(a: Dimension, b: Dimension): Dimension {
  return a.map((exponent, at) => clean(exponent - b[at]));
}

/** The dimension of a power: exponents multiplied by `n`, which may be a fraction (0.5 for a square root). */
export function powerOf(a: Dimension, n: number): Dimension {
  return a.map((exponent) => clean(exponent * n));
}

/** Whether two dimensions are equal. */
export function sameDimension(a: Dimension, b: Dimension): boolean {
  return a.every((exponent, at) => exponent === b[at]);
}

/** Whether a dimension is that of a plain number. */
export function isPlain(a: Dimension): boolean {
  return a.every((exponent) => exponent === 0);
}

/** Exponents are kept as multiples of 1/12, so that a root undone by a power compares equal; -0 becomes 0. */
function clean(exponent: number): number {
  const twelfths = Math.round(exponent * 12);
  return Math.abs(twelfths - exponent * 12) < 1e-6 ? twelfths / 12 + 0 : exponent;
}
