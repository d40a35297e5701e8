/**
 * Scales a square matrix in place by a diagonal similarity D⁻¹·A·D whose factors are powers of two, so that row and
 * column lengths come close to each other and no digit is lost (Parlett and Reinsch, 1969). This makes eigenvalues and
 * exponentials more accurate when the states have very different units. The lengths are root sums of squares and include
 * the diagonal: with absolute sums that leave it out, balancing can do harm (James, Langou and Lowery, 2014).
 * @param data n × n, row by row; changed.
 * @returns the diagonal of D.
 */
export function balance(data: Float64Array, n: number): Float64Array {
  const factors = new Float64Array(n).fill(1);
  // Each round reduces the norm; matrices from practice need two or three.
  for (let round = 0; round < MOST_ROUNDS; round++) {
    let changed = false;
    for (let i = 0; i < n; i++) {
      const factor = factorFor(data, n, i);
      if (factor === 1) continue;
      changed = true;
      factors[i] *= factor;
      for (let j = 0; j < n; j++) data[i * n + j] /= factor;
      for (let j = 0; j < n; j++) data[j * n + i] *= factor;
    }
    if (!changed) break;
  }
  return factors;
}

const MOST_ROUNDS = 60;
const WORTHWHILE = 0.95;
const LARGEST_FACTOR = 2 ** 100;

function factorFor(data: Float64Array, n: number, i: number): number {
  let column = 0;
  let row = 0;
  for (let j = 0; j < n; j++) {
    if (j === i) continue;
    column += data[j * n + i] * data[j * n + i];
    row += data[i * n + j] * data[i * n + j];
  }
  // Nothing couples to this state, or it couples to nothing: any factor would do, so it is left as it is.
  if (!(column > 0 && row > 0 && Number.isFinite(column + row))) return 1;
  const diagonal = data[i * n + i] * data[i * n + i];
  column = Math.sqrt(column + diagonal);
  row = Math.sqrt(row + diagonal);
  let factor = 1;
  while (column * factor * 2 < row / factor && factor < LARGEST_FACTOR) factor *= 2;
  while (column * factor > (row / factor) * 2 && factor > 1 / LARGEST_FACTOR) factor /= 2;
  return column * factor + row / factor < WORTHWHILE * (column + row) ? factor : 1;
}
