import { fromRows, zeros } from '../../src/linear/matrix.js';
import { NumericFailure } from '../../src/linear/numeric_failure.js';
import type { StateEquations } from '../../src/linear/state_equations.js';

/** A rational transfer function in s, or in z when it has a sampling period (s). */
export interface PolynomialRatio {
  /** Coefficients in descending powers, highest first. */
  numerator: readonly number[];
  /** Coefficients in descending powers, highest first. */
  denominator: readonly number[];
  period: number | undefined;
}

/**
 * State equations with the given transfer function, one state for each power of the denominator: a chain of
 * integrators (or delays) whose first link takes the input and the feedback of all states.
 * @throws NumericFailure when the denominator is zero or of a lower degree than the numerator.
 */
export function stateEquationsOf(ratio: PolynomialRatio): StateEquations {
  const denominator = withoutLeadingZeros(ratio.denominator);
  const numerator = withoutLeadingZeros(ratio.numerator);
  const n = denominator.length - 1;
  if (n < 0) throw new NumericFailure('a transfer function has the denominator 0');
  if (numerator.length - 1 > n) {
    throw new NumericFailure(
      `a transfer function has a numerator of degree ${numerator.length - 1} over a denominator of degree ${n}: it answers before its input`,
    );
  }
  const lead = denominator[0];
  const padded = [...new Array<number>(n + 1 - numerator.length).fill(0), ...numerator];
  const through = padded[0] / lead;
  const a = zeros(n, n);
  for (let j = 0; j < n; j++) {
    a.data[j] = -denominator[j + 1] / lead;
    if (j > 0) a.data[j * n + j - 1] = 1;
  }
  const b = zeros(n, 1);
  if (n > 0) b.data[0] = 1 / lead;
  const c = zeros(1, n);
  for (let j = 0; j < n; j++) c.data[j] = padded[j + 1] - through * denominator[j + 1];
  return { a, b, c, d: fromRows([[through]]), period: ratio.period };
}

function withoutLeadingZeros(coefficients: readonly number[]): readonly number[] {
  const first = coefficients.findIndex((coefficient) => coefficient !== 0);
  return first < 0 ? [] : coefficients.slice(first);
}
