import { balance } from './balance.js';
import {
  add,
  blockOf,
  columnSumNorm,
  identity,
  type Matrix,
  multiply,
  place,
  scale,
  shape,
  zeros,
} from './matrix.js';
import { NumericFailure } from './numeric_failure.js';
import { solve } from './solve.js';

/**
 * The exponential of a square matrix, by scaling and squaring with a diagonal Padé approximant whose degree is chosen
 * from the norm (Higham, 2005), after taking out the mean of the diagonal and balancing. It does not diagonalise, so
 * defective matrices are no special case.
 * @throws RangeError when `a` is not square, NumericFailure when an entry or the result is not finite.
 */
export function exponential(a: Matrix): Matrix {
  if (a.rows !== a.columns) throw new RangeError(`the exponential of a matrix of ${shape(a)} is not defined`);
  const n = a.rows;
  if (n === 0) return zeros(0, 0);
  const balanced = { rows: n, columns: n, data: a.data.slice() };
  const factors = balance(balanced.data, n);
  const mean = diagonalMean(balanced);
  const reduced = add(balanced, identity(n), -mean);
  // Taking the mean out pays only where it makes the matrix smaller.
  const worthwhile = columnSumNorm(reduced) < columnSumNorm(balanced);
  const result = worthwhile
    ? scaleBack(squaredPade(reduced, mean), factors)
    : scaleBack(squaredPade(balanced, 0), factors);
  if (!result.data.every(Number.isFinite)) {
    throw new NumericFailure(
      `the exponential of a matrix of ${shape(a)} with norm ${columnSumNorm(a)} is not finite`,
    );
  }
  return result;
}

/**
 * The exact movement over `duration` (s) of x' = a·x + b·u with u constant: x(duration) = phi·x(0) + gamma·u, from one
 * exponential of the augmented matrix (Van Loan, 1978). `a` is n × n, `b` is n × m.
 * @throws RangeError when the sizes do not fit, NumericFailure when the result is not finite.
 */
export function discretise(a: Matrix, b: Matrix, duration: number): { phi: Matrix; gamma: Matrix } {
  if (a.rows !== b.rows) throw new RangeError(`a of ${shape(a)} and b of ${shape(b)} do not fit together`);
  const n = a.rows;
  const m = b.columns;
  const augmented = zeros(n + m, n + m);
  place(augmented, scale(a, duration), 0, 0);
  place(augmented, scale(b, duration), 0, n);
  const moved = exponential(augmented);
  return { phi: blockOf(moved, 0, 0, n, n), gamma: blockOf(moved, 0, n, n, m) };
}

function diagonalMean(a: Matrix): number {
  let sum = 0;
  for (let i = 0; i < a.rows; i++) sum += a.data[i * a.rows + i];
  return sum / a.rows;
}

function scaleBack(a: Matrix, factors: Float64Array): Matrix {
  const n = a.rows;
  for (let i = 0; i < n; i++) {
    for (let j = 0; j < n; j++) a.data[i * n + j] *= factors[i] / factors[j];
  }
  return a;
}

/** Norm up to which each degree reaches double precision (Higham, 2005, table 2.3). */
const REACH = [
  { degree: 3, norm: 1.495585217958292e-2 },
  { degree: 5, norm: 2.53939833006323e-1 },
  { degree: 7, norm: 9.504178996162932e-1 },
  { degree: 9, norm: 2.097847961257068 },
];
const REACH_13 = 5.371920351148152;

/** exp(a + mean·I). The factor exp(mean) is spread over the squarings so that neither part leaves the number range. */
function squaredPade(a: Matrix, mean: number): Matrix {
  const norm = columnSumNorm(a);
  const small = REACH.find((entry) => norm <= entry.norm);
  if (small) return scale(pade(a, small.degree), Math.exp(mean));
  const halvings = Math.max(0, Math.ceil(Math.log2(norm / REACH_13)));
  if (!(halvings <= 1100))
    throw new NumericFailure(`the exponential of a matrix with norm ${norm} cannot be formed`);
  let result = scale(pade(scale(a, 2 ** -halvings), 13), Math.exp(mean * 2 ** -halvings));
  for (let k = 0; k < halvings; k++) result = multiply(result, result);
  return result;
}

/** The [q/q] Padé approximant of exp(a): (V − U)⁻¹·(V + U), with V and U the even and odd terms. */
function pade(a: Matrix, degree: number): Matrix {
  const square = multiply(a, a);
  const weights = padeWeights(degree);
  let even = scale(identity(a.rows), weights[0]);
  let odd = scale(identity(a.rows), weights[1]);
  let power = square;
  for (let k = 2; k <= degree; k += 2) {
    if (k > 2) power = multiply(power, square);
    even = add(even, power, weights[k]);
    if (k + 1 <= degree) odd = add(odd, power, weights[k + 1]);
  }
  const u = multiply(a, odd);
  return solve(add(even, u, -1), add(even, u));
}

/** Weight of the k-th power: (2q − k)!·q! / ((2q)!·k!·(q − k)!), from its recurrence. */
function padeWeights(degree: number): number[] {
  const weights = [1];
  for (let k = 1; k <= degree; k++) {
    weights.push((weights[k - 1] * (degree - k + 1)) / (k * (2 * degree - k + 1)));
  }
  return weights;
}
