import type { Slope, SlopeField } from './slope.js';
import type { SlopeLoop } from './slope_cycle.js';
import { combined, multiplied } from './slope_matrix.js';

/** A polynomial with quantities over a box for coefficients, ascending powers. */
export type SlopePolynomial = Slope[];

/**
 * Denominator and numerator of a loop transfer L in δ = z − 1, which keeps the digits of slow poles (Faddeev and Faddeeva
 * 1963: the coefficients of det(δI − Q) and of the adjoint from one recurrence).
 */
export function polynomialsOf(
  field: SlopeField,
  { a, b, c, d }: SlopeLoop,
): { denominator: SlopePolynomial; numerator: SlopePolynomial } {
  const n = a.length;
  const one = field.constant(1);
  const q = a.map((row, i) => row.map((entry, j) => (i === j ? field.subtract(entry, one) : entry)));
  const denominator = new Array<Slope>(n + 1).fill(one);
  const numerator = new Array<Slope>(n + 1).fill(field.constant(0));
  const column = b.map((entry) => [entry]);
  let adjoint = q.map((row, i) => row.map((_, j) => field.constant(Number(i === j))));
  for (let k = 1; k <= n; k++) {
    const through = combined(field, c, multiplied(field, adjoint, column));
    [numerator[n - k]] = through;
    const next = multiplied(field, q, adjoint);
    const trace = next.reduce((sum, row, i) => field.add(sum, row[i]), field.constant(0));
    const coefficient = field.divide(field.negate(trace), field.constant(k));
    denominator[n - k] = coefficient;
    adjoint = next.map((row, i) => row.with(i, field.add(row[i], coefficient)));
  }
  return {
    denominator,
    numerator: numerator.map((entry, k) => field.add(entry, field.multiply(d, denominator[k]))),
  };
}

/**
 * The polynomial in w that has its roots left of the imaginary axis exactly where one in δ = z − 1 has them inside the unit
 * circle: δ = 2w/(1 − w), times (1 − w)ⁿ.
 */
export function onHalfPlane(field: SlopeField, inDelta: SlopePolynomial): SlopePolynomial {
  const n = inDelta.length - 1;
  const result = new Array<Slope>(n + 1).fill(field.constant(0));
  inDelta.forEach((coefficient, k) => {
    for (let j = 0; j <= n - k; j++) {
      const weight = 2 ** k * binomial(n - k, j) * (j % 2 === 0 ? 1 : -1);
      result[j + k] = field.add(result[j + k], field.multiply(coefficient, field.constant(weight)));
    }
  });
  return result;
}

function binomial(n: number, k: number): number {
  let result = 1;
  for (let i = 1; i <= k; i++) result = (result * (n - k + i)) / i;
  return result;
}
