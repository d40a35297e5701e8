import { balance } from './balance.js';
import type { Complex } from './complex.js';
import {
  add,
  euclideanNorm,
  fromRows,
  identity,
  type Matrix,
  multiply,
  place,
  scale,
  transpose,
  zeros,
} from './matrix.js';
import { dampingRatioOf, exponentOf } from './modes.js';
import { NumericFailure } from './numeric_failure.js';
import { polesOf } from './poles.js';
import { solve } from './solve.js';
import type { StateEquations } from './state_equations.js';

/**
 * The least damping ratio −Re s/|s| over the modes of a closed loop that differs from sample to sample. A mode is a Floquet
 * multiplier z of the movement over the cycle T (Floquet, 1883), s = (ln z + 2πjm)/T: which m is its own is not in z but in how
 * the signal moves within the cycle. It is that of the sine which is strongest in the signal, of all e^{st} that make up the
 * mode. Of a loop that is the same at every sample there is one such sine, and s is that of its own mode.
 * @param sensitivity the lifted (I + L)⁻¹, whose outputs the states drive as they drive the signal of the closed loop.
 * @returns 1 for a loop without states.
 * @throws NumericFailure where two sines of different damping are as strong in the least damped mode.
 */
export function leastLiftedDamping(sensitivity: StateEquations): number {
  const { a, c, period } = balanced(sensitivity);
  let [least, surely] = [1, 1];
  for (const pole of polesOf(a, period)) {
    if (pole.imaginary < 0) continue;
    const state = stateOfMotion(a, pole);
    if (state === undefined) continue;
    const sines = strongestSines(
      exponentOf(pole, period!),
      multiply(c, state),
      period!,
      euclideanNorm(c.data),
    );
    const dampings = sines.map(dampingRatioOf);
    least = Math.min(least, ...dampings);
    surely = Math.min(surely, Math.max(...dampings));
  }
  if (surely - least <= 1e-12) return least;
  throw new NumericFailure(
    `the damping is not one number: in a mode of the closed loop sines of different frequencies are about as strong, so that the least damping is anything from ${rounded(least)} to ${rounded(surely)}`,
  );
}

/** The states scaled alike, so that sizes of them can be compared. */
function balanced({ a, c, ...rest }: StateEquations): StateEquations {
  const n = a.rows;
  const entries = a.data.slice();
  const factors = balance(entries, n);
  const seen = c.data.map((entry, at) => entry * factors[at % n]);
  return { ...rest, a: { ...a, data: entries }, c: { ...c, data: seen } };
}

const rounded = (x: number): string => String(Number(x.toPrecision(3)));

/** A sine counts as one of the strongest from this share of the strongest on. */
const asStrong = 0.9;
/** A signal that is so small a share of what states of this size make of it is rounding. */
const unseen = 1e-10;

/**
 * The s of the sines that are strongest in a signal, of all those which are the same at the ends of the cycles.
 * @param exponent s of one of them.
 * @param signal its values in one cycle: one row for each, real part and imaginary part.
 * @param size the largest that the signal can be for a state of length one.
 */
function strongestSines(exponent: Complex, signal: Matrix, period: number, size: number): Complex[] {
  const changes = signal.rows;
  const sines = Array.from({ length: changes }, (_, m) => {
    // At most half a turn between two changes.
    const turn = (exponent.imaginary * period + 2 * Math.PI * m) / changes;
    const imaginary = ((turn > Math.PI ? turn - 2 * Math.PI : turn) * changes) / period;
    const s = { real: exponent.real, imaginary };
    return { s, strength: strengthIn(signal, s, period / changes) };
  });
  const most = Math.max(...sines.map(({ strength }) => strength));
  const bar = most > unseen * size ? asStrong * most : 0;
  return sines.filter(({ strength }) => strength >= bar).map(({ s }) => s);
}

/** |Σᵢ xᵢ·e^{−s·i·T}|, T being the time between two values of x. */
function strengthIn(signal: Matrix, s: Complex, period: number): number {
  let [real, imaginary] = [0, 0];
  for (let i = 0; i < signal.rows; i++) {
    const size = Math.exp(-s.real * period * i);
    const angle = -s.imaginary * period * i;
    const [x, y] = [signal.data[2 * i], signal.data[2 * i + 1]];
    real += size * (x * Math.cos(angle) - y * Math.sin(angle));
    imaginary += size * (x * Math.sin(angle) + y * Math.cos(angle));
  }
  return Math.hypot(real, imaginary);
}

/** By how much a multiplier must be above its own rounding to be told from zero. */
const plainly = 1e3;

/**
 * The state of length one that goes by a multiplier, n × 2 (real and imaginary parts); undefined where the multiplier is
 * nothing but the rounding of zero, of a motion that is over within the cycle.
 * @param pole the multiplier less one.
 */
function stateOfMotion(a: Matrix, pole: Complex): Matrix | undefined {
  const less = add(a, identity(a.rows), -1);
  const state = stateFor(less, pole);
  const across = stateFor(transpose(less), { ...pole, imaginary: -pole.imaginary });
  // By the error of the matrix over this an eigenvalue may be wrong (Wilkinson, 1965).
  const along = Math.hypot(...productOf(across, state));
  const doubt = (a.rows * Number.EPSILON * euclideanNorm(a.data)) / along;
  return Math.hypot(1 + pole.real, pole.imaginary) > plainly * doubt ? state : undefined;
}

/** Farther beside an eigenvalue it is not found any more. */
const mostRoundings = 1e3;

/** wᴴ·x of two states of length one. */
function productOf(w: Matrix, x: Matrix): [number, number] {
  let [real, imaginary] = [0, 0];
  for (let i = 0; i < w.rows; i++) {
    const [wr, wi, xr, xi] = [w.data[2 * i], w.data[2 * i + 1], x.data[2 * i], x.data[2 * i + 1]];
    real += wr * xr + wi * xi;
    imaginary += wr * xi - wi * xr;
  }
  return [real, imaginary];
}

/**
 * An eigenvector of length one by inverse iteration (Wielandt, 1944), next to an eigenvalue.
 * @param roundings how far beside it, in roundings of the matrix; more where that hits the eigenvalue itself.
 */
function stateFor(a: Matrix, pole: Complex, roundings = 1): Matrix {
  const beside = roundings * Math.max(Number.EPSILON * euclideanNorm(a.data), Number.MIN_VALUE ** 0.5);
  try {
    return stateBeside(a, { ...pole, real: pole.real + beside });
  } catch (error) {
    if (!(error instanceof NumericFailure) || roundings > mostRoundings) throw error;
    return stateFor(a, pole, 8 * roundings);
  }
}

function stateBeside(a: Matrix, { real, imaginary }: Complex): Matrix {
  const n = a.rows;
  const shifted = add(a, identity(n), -real);
  const both = zeros(2 * n, 2 * n);
  place(both, shifted, 0, 0);
  place(both, shifted, n, n);
  place(both, scale(identity(n), imaginary), 0, n);
  place(both, scale(identity(n), -imaginary), n, 0);
  let x = zeros(2 * n, 1);
  // Entries without a pattern, so that no eigenvector lies across.
  for (let i = 0; i < n; i++) x.data[i] = 1 + ((i * 0.6180339887498949) % 1);
  for (let round = 0; round < 3; round++) {
    x = solve(both, x);
    x = scale(x, 1 / euclideanNorm(x.data));
  }
  return fromRows(Array.from({ length: n }, (_, i) => [x.data[i], x.data[n + i]]));
}
