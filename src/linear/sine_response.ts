import { add, identity, type Matrix, multiply, place, scale, zeros } from './matrix.js';
import { NumericFailure } from './numeric_failure.js';
import type { StateEquations } from './state_equations.js';

/**
 * All that a lifted response G with K inputs and K outputs, the values of one signal in a cycle, makes of a sine: of the
 * input e^{jωt} it makes sines of the frequency ω and of those that differ from it by whole multiples of the cycle's (harmonic
 * transfer functions: Wereley, 1991; Bittanti and Colaneri, 2009).
 * @param system lifted; no output depends on an input of the same cycle that comes later.
 * @returns at the period T between two samples one output for each sample of the cycle: a factor of size one times G·v with
 * v(ω) = (1, e^{jωT}, …, e^{j(K−1)ωT})/√K. The length of it is the root-mean-square of all that comes out over that of the sine,
 * in the mean over its phase where ω is a multiple of half the cycle's frequency.
 */
export function sineResponse({ a, b, c, d, period }: StateEquations): StateEquations {
  // The states of the cycle stand in a ring of K places, which they go round once a cycle; the inputs of a cycle are kept
  // until it is over. So all outputs are late by K − 1 samples, which is the factor of size one.
  const n = a.rows;
  const changes = b.columns;
  const last = (changes - 1) * n;
  const kept = changes * n;
  const size = kept + changes - 1;
  const share = 1 / Math.sqrt(changes);
  const ring = ringOf(a, changes, size);
  const entered = zeros(size, 1);
  const seen = zeros(changes, size);
  const through = zeros(changes, 1);
  place(seen, scale(c, share), 0, last);
  for (let k = 0; k < changes; k++) {
    // Input k of the cycle has come K − 1 − k samples before the last.
    const age = changes - 1 - k;
    if (age === 0) {
      place(entered, columnOf(b, k), 0, 0);
      place(through, scale(columnOf(d, k), share), 0, 0);
      continue;
    }
    place(ring, columnOf(b, k), 0, kept + age - 1);
    place(seen, scale(columnOf(d, k), share), 0, kept + age - 1);
    if (age > 1) ring.data[(kept + age - 1) * size + kept + age - 2] = 1;
    else entered.data[kept] = 1;
  }
  return { a: ring, b: entered, c: seen, d: through, period: period! / changes };
}

/**
 * The part of `sineResponse` that has the frequency of the sine itself, vᴴ·G·v, at the period T: an ordinary response with
 * one input and one output. Of a loop that is the same at every sample it is the response of that.
 */
export function sameFrequencyResponse({ a, b, c, d, period }: StateEquations): StateEquations {
  // Each input enters the ring as far on as it has been there for when the cycle ends; outputs are gathered as they come.
  const n = a.rows;
  const changes = b.columns;
  const last = (changes - 1) * n;
  const kept = changes * n;
  const size = kept + changes - 1;
  const ring = ringOf(a, changes, size);
  const entered = zeros(size, 1);
  const seen = zeros(1, size);
  const through = zeros(1, 1);
  for (let k = 0; k < changes; k++) place(entered, columnOf(b, k), k * n, 0);
  for (let age = 0; age < changes; age++) {
    let direct = 0;
    for (let k = 0; k + age < changes; k++) direct += d.data[(k + age) * changes + k] / changes;
    const row = scale(rowOf(c, age), 1 / changes);
    if (age === 0) {
      place(seen, row, 0, last);
      through.data[0] = direct;
      if (changes > 1) seen.data[kept] = 1;
      continue;
    }
    const at = kept + age - 1;
    place(ring, row, at, last);
    entered.data[at] = direct;
    if (age + 1 < changes) ring.data[at * size + at + 1] = 1;
  }
  return { a: ring, b: entered, c: seen, d: through, period: period! / changes };
}

/** K copies of the states, each the one before it a sample ago, and the first what the cycle makes of the last. */
function ringOf(a: Matrix, places: number, size: number): Matrix {
  const n = a.rows;
  const ring = zeros(size, size);
  place(ring, a, 0, (places - 1) * n);
  for (let k = 1; k < places; k++) place(ring, identity(n), k * n, (k - 1) * n);
  return ring;
}

function columnOf(matrix: Matrix, index: number): Matrix {
  const column = zeros(matrix.rows, 1);
  for (let i = 0; i < matrix.rows; i++) column.data[i] = matrix.data[i * matrix.columns + index];
  return column;
}

function rowOf(matrix: Matrix, index: number): Matrix {
  return {
    rows: 1,
    columns: matrix.columns,
    data: matrix.data.slice(index * matrix.columns, (index + 1) * matrix.columns),
  };
}

/**
 * The loop as the frequency response of its signal shows it: with S(ω) the part of the same frequency that the signal has of a
 * sine added to it, the loop closed, this is 1/S(ω) − 1, the ratio of what returns to what goes out as it is measured on a
 * closed loop. Its crossing of −1 at ω is exact for a factor on the frequency ω alone, since what the loop does at the other
 * frequencies of the cycle is in it (they are closed: the Schur complement of I + L in harmonic coordinates). Of a loop that
 * is the same at every sample it is L.
 * @param sensitivity the lifted (I + L)⁻¹.
 * @returns one input and one output at the period of the changes, with the sign of L.
 * @throws NumericFailure when nothing of what is added is in the signal at the same instant.
 */
export function loopSeenAtOneFrequency(sensitivity: StateEquations): StateEquations {
  const { a, b, c, d, period } = sameFrequencyResponse(sensitivity);
  const direct = d.data[0];
  if (direct === 0) {
    throw new NumericFailure(
      'the loop has no one response over frequency: a value added to the signal is not in it at the same instant',
    );
  }
  return {
    a: add(a, multiply(b, c), -1 / direct),
    b: scale(b, 1 / direct),
    c: scale(c, -1 / direct),
    d: { rows: 1, columns: 1, data: Float64Array.of(1 / direct - 1) },
    period,
  };
}
