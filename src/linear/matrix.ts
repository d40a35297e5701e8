/** A dense real matrix; entry (i, j), both counted from 0, is `data[i * columns + j]`. */
export interface Matrix {
  rows: number;
  columns: number;
  data: Float64Array;
}

/** A matrix of zeros, rows × columns. */
export function zeros(rows: number, columns: number): Matrix {
  return { rows, columns, data: new Float64Array(rows * columns) };
}

/** The identity matrix, n × n. */
export function identity(n: number): Matrix {
  const result = zeros(n, n);
  for (let i = 0; i < n; i++) result.data[i * n + i] = 1;
  return result;
}

/**
 * A matrix from its rows. An empty list is 0 × `columns`, so that systems without states can be written down.
 * @throws RangeError when the rows are not all of the same length.
 */
export function fromRows(rows: readonly (readonly number[])[], columns = rows[0]?.length ?? 0): Matrix {
  const result = zeros(rows.length, columns);
  rows.forEach((row, i) => {
    if (row.length !== columns) {
      throw new RangeError(`row ${i} of a matrix has ${row.length} entries where ${columns} were expected`);
    }
    result.data.set(row, i * columns);
  });
  return result;
}

/** The rows of a matrix as lists of numbers. */
export function toRows(a: Matrix): number[][] {
  return Array.from({ length: a.rows }, (_, i) =>
    Array.from(a.data.subarray(i * a.columns, (i + 1) * a.columns)),
  );
}

/** A copy that shares no memory with `a`. */
export function copy(a: Matrix): Matrix {
  return { rows: a.rows, columns: a.columns, data: a.data.slice() };
}

/**
 * The product a·b, (m × k)·(k × n).
 * @throws RangeError when the inner sizes differ.
 */
export function multiply(a: Matrix, b: Matrix): Matrix {
  if (a.columns !== b.rows) throw new RangeError(`cannot multiply ${shape(a)} by ${shape(b)}`);
  const result = zeros(a.rows, b.columns);
  const n = b.columns;
  for (let i = 0; i < a.rows; i++) {
    for (let k = 0; k < a.columns; k++) {
      const factor = a.data[i * a.columns + k];
      if (factor === 0) continue;
      for (let j = 0; j < n; j++) result.data[i * n + j] += factor * b.data[k * n + j];
    }
  }
  return result;
}

/**
 * The sum a + factor·b of two matrices of one size.
 * @throws RangeError when the sizes differ.
 */
export function add(a: Matrix, b: Matrix, factor = 1): Matrix {
  if (a.rows !== b.rows || a.columns !== b.columns) {
    throw new RangeError(`cannot add ${shape(a)} and ${shape(b)}`);
  }
  const result = copy(a);
  for (let i = 0; i < result.data.length; i++) result.data[i] += factor * b.data[i];
  return result;
}

/** factor·a. */
export function scale(a: Matrix, factor: number): Matrix {
  return { rows: a.rows, columns: a.columns, data: a.data.map((entry) => factor * entry) };
}

/** The transpose. */
export function transpose(a: Matrix): Matrix {
  const result = zeros(a.columns, a.rows);
  for (let i = 0; i < a.rows; i++) {
    for (let j = 0; j < a.columns; j++) result.data[j * a.rows + i] = a.data[i * a.columns + j];
  }
  return result;
}

/**
 * Copies `block` into `target`, its first entry at (row, column).
 * @throws RangeError when the block does not fit.
 */
export function place(target: Matrix, block: Matrix, row: number, column: number): void {
  if (row + block.rows > target.rows || column + block.columns > target.columns) {
    throw new RangeError(`a block ${shape(block)} at (${row}, ${column}) does not fit into ${shape(target)}`);
  }
  for (let i = 0; i < block.rows; i++) {
    const line = block.data.subarray(i * block.columns, (i + 1) * block.columns);
    target.data.set(line, (row + i) * target.columns + column);
  }
}

/** The block of `rows` × `columns` entries whose first entry is (row, column), as a copy. */
export function blockOf(a: Matrix, row: number, column: number, rows: number, columns: number): Matrix {
  const result = zeros(rows, columns);
  for (let i = 0; i < rows; i++) {
    const start = (row + i) * a.columns + column;
    result.data.set(a.data.subarray(start, start + columns), i * columns);
  }
  return result;
}

/** The largest sum of absolute values down a column; NaN when an entry is not a number. */
export function columnSumNorm(a: Matrix): number {
  let largest = 0;
  for (let j = 0; j < a.columns; j++) {
    let sum = 0;
    for (let i = 0; i < a.rows; i++) sum += Math.abs(a.data[i * a.columns + j]);
    largest = Math.max(largest, sum);
  }
  return largest;
}

/** The size in words, e.g. `3 x 2`, for messages. */
export function shape(a: Matrix): string {
  return `${a.rows} x ${a.columns}`;
}

/** Root of the sum of squares of any number of values, without overflow on the way. */
export function euclideanNorm(values: ArrayLike<number>): number {
  let most = 0;
  for (let i = 0; i < values.length; i++) most = Math.max(most, Math.abs(values[i]));
  if (most === 0 || !Number.isFinite(most)) return most;
  let sum = 0;
  for (let i = 0; i < values.length; i++) sum += (values[i] / most) ** 2;
  return most * Math.sqrt(sum);
}
