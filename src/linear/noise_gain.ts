import { add, columnSumNorm, identity, type Matrix, multiply, scale, transpose } from './matrix.js';
import { NumericFailure } from './numeric_failure.js';
import { areStable, polesOf } from './poles.js';
import { solve } from './solve.js';
import type { StateEquations } from './state_equations.js';

/**
 * The root-mean-square gain from white noise (H2 norm). Sampled: the standard deviation of the outputs together for inputs
 * of standard deviation one, independent from sample to sample and of each other. Continuous: the same for inputs of unit
 * two-sided spectral density.
 * @returns Infinity for a system that is not stable, and for a continuous one with a feedthrough.
 * @throws NumericFailure when an entry is not finite or the sum does not settle.
 */
export function noiseGain(system: StateEquations): number {
  const { a, b, c, d, period } = system;
  if (!areStable(polesOf(a, period), period)) return Number.POSITIVE_INFINITY;
  const direct = sumOfSquares(d);
  if (period === undefined && direct > 0) return Number.POSITIVE_INFINITY;
  const covariance = stateCovariance(a, multiply(b, transpose(b)), period);
  const seen = multiply(c, multiply(covariance, transpose(c)));
  let sum = direct;
  for (let i = 0; i < c.rows; i++) sum += seen.data[i * c.rows + i];
  return Math.sqrt(Math.max(0, sum));
}

/**
 * The covariance P of the states under white noise of covariance (or spectral density) q: P = a·P·aᵀ + q when sampled,
 * a·P + P·aᵀ + q = 0 when continuous. `a` must be stable. By doubling the number of summed samples each round (Smith, 1968).
 * @throws NumericFailure when the sum does not settle.
 */
export function stateCovariance(a: Matrix, q: Matrix, period: number | undefined): Matrix {
  if (a.rows === 0) return q;
  return period === undefined ? continuousCovariance(a, q) : sampledCovariance(a, q);
}

const MOST_ROUNDS = 60;

function sampledCovariance(a: Matrix, q: Matrix): Matrix {
  let power = a;
  let sum = q;
  for (let round = 0; round < MOST_ROUNDS; round++) {
    const more = multiply(power, multiply(sum, transpose(power)));
    sum = add(sum, more);
    if (columnSumNorm(more) <= Number.EPSILON * 0.01 * columnSumNorm(sum)) return sum;
    power = multiply(power, power);
  }
  throw new NumericFailure(
    `the covariance did not settle within 2^${MOST_ROUNDS} samples: the system is hardly stable`,
  );
}

/** The bilinear map with a rate between the fastest and the slowest pole turns the equation into a sampled one with the same P. */
function continuousCovariance(a: Matrix, q: Matrix): Matrix {
  const sizes = polesOf(a, undefined).map(({ real, imaginary }) => Math.hypot(real, imaginary));
  const rate = Math.sqrt(Math.max(...sizes) * Math.min(...sizes));
  const one = scale(identity(a.rows), rate);
  const entry = solve(add(one, a, -1), identity(a.rows));
  const moved = multiply(entry, add(one, a));
  return sampledCovariance(moved, scale(multiply(entry, multiply(q, transpose(entry))), 2 * rate));
}

function sumOfSquares(a: Matrix): number {
  return a.data.reduce((sum, entry) => sum + entry * entry, 0);
}
