import { copy, type Matrix, shape } from './matrix.js';
import { NumericFailure } from './numeric_failure.js';

/**
 * The matrix x with a·x = b, by elimination with partial pivoting (Wilkinson, 1961). `a` is n × n, `b` is n × m.
 * @throws RangeError when the sizes do not fit, NumericFailure when `a` is singular.
 */
export function solve(a: Matrix, b: Matrix): Matrix {
  if (a.rows !== a.columns || a.rows !== b.rows) {
    throw new RangeError(`cannot solve ${shape(a)} against a right-hand side of ${shape(b)}`);
  }
  const left = copy(a);
  const right = copy(b);
  for (let k = 0; k < a.rows; k++) {
    swapRows(left, right, k, pivotRow(left, k));
    eliminateBelow(left, right, k);
  }
  substituteBack(left, right);
  return right;
}

function pivotRow(a: Matrix, k: number): number {
  const n = a.columns;
  let best = k;
  for (let i = k + 1; i < n; i++) {
    if (Math.abs(a.data[i * n + k]) > Math.abs(a.data[best * n + k])) best = i;
  }
  const pivot = a.data[best * n + k];
  if (pivot === 0 || !Number.isFinite(pivot)) {
    throw new NumericFailure(
      `a matrix of ${shape(a)} is singular: pivot ${k + 1} of ${n} is ${pivot}, a finite number other than 0 was expected`,
    );
  }
  return best;
}

function swapRows(left: Matrix, right: Matrix, i: number, k: number): void {
  if (i === k) return;
  for (const { data, columns } of [left, right]) {
    for (let j = 0; j < columns; j++) {
      const kept = data[i * columns + j];
      data[i * columns + j] = data[k * columns + j];
      data[k * columns + j] = kept;
    }
  }
}

function eliminateBelow(left: Matrix, right: Matrix, k: number): void {
  const n = left.columns;
  const m = right.columns;
  for (let i = k + 1; i < n; i++) {
    const factor = left.data[i * n + k] / left.data[k * n + k];
    if (factor === 0) continue;
    for (let j = k + 1; j < n; j++) left.data[i * n + j] -= factor * left.data[k * n + j];
    for (let j = 0; j < m; j++) right.data[i * m + j] -= factor * right.data[k * m + j];
  }
}

function substituteBack(left: Matrix, right: Matrix): void {
  const n = left.columns;
  const m = right.columns;
  for (let i = n - 1; i >= 0; i--) {
    for (let k = i + 1; k < n; k++) {
      const factor = left.data[i * n + k];
      if (factor === 0) continue;
      for (let j = 0; j < m; j++) right.data[i * m + j] -= factor * right.data[k * m + j];
    }
    for (let j = 0; j < m; j++) right.data[i * m + j] /= left.data[i * n + i];
  }
}
