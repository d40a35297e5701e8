import { copy, type Matrix, shape } from './matrix.js';

/**
 * The determinant of a real square matrix, by elimination with partial pivoting (Wilkinson, 1961).
 * @throws RangeError when the matrix is not square.
 */
export function determinantOf(a: Matrix): number {
  if (a.rows !== a.columns) throw new RangeError(`a matrix of ${shape(a)} has no determinant`);
  const n = a.rows;
  const { data } = copy(a);
  let result = 1;
  for (let k = 0; k < n; k++) {
    let pivot = k;
    for (let i = k + 1; i < n; i++) if (Math.abs(data[i * n + k]) > Math.abs(data[pivot * n + k])) pivot = i;
    const value = data[pivot * n + k];
    result *= pivot === k ? value : -value;
    if (value === 0) return 0;
    for (let j = k; j < n; j++) {
      const kept = data[k * n + j];
      data[k * n + j] = data[pivot * n + j];
      data[pivot * n + j] = kept;
    }
    for (let i = k + 1; i < n; i++) {
      const factor = data[i * n + k] / value;
      for (let j = k + 1; j < n; j++) data[i * n + j] -= factor * data[k * n + j];
    }
  }
  return result;
}
