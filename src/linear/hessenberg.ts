/**
 * Brings a square matrix in place to upper Hessenberg form by Householder reflections (Householder, 1958; Wilkinson,
 * 1965), which keep its first basis vector, and applies the same change of basis to rows that multiply from the left.
 * @param data n × n, row by row; changed to Qᵀ·A·Q, exactly zero below the first subdiagonal.
 * @param rows k × n, row by row; changed to rows·Q. May be empty.
 */
export function reduceToHessenberg(data: Float64Array, n: number, rows: Float64Array = NO_ROWS): void {
  const v = new Float64Array(n);
  for (let k = 0; k < n - 2; k++) {
    for (let i = k + 1; i < n; i++) v[i] = data[i * n + k];
    const weight = makeReflection(v, k + 1, n);
    if (weight === 0) continue;
    reflectFromLeft(data, n, v, weight, k + 1);
    reflectFromRight(data, n, v, weight, k + 1);
    reflectFromRight(rows, n, v, weight, k + 1);
    for (let i = k + 2; i < n; i++) data[i * n + k] = 0;
  }
}

const NO_ROWS = new Float64Array(0);

/**
 * Replaces v[first…n) by the vector of the reflection I − weight·v·vᵀ that turns it into a multiple of its first entry.
 * @returns the weight; 0 when the entries after the first are all zero and nothing needs to be done.
 */
export function makeReflection(v: Float64Array, first: number, n: number): number {
  let largest = 0;
  for (let i = first + 1; i < n; i++) largest = Math.max(largest, Math.abs(v[i]));
  if (largest === 0) return 0;
  largest = Math.max(largest, Math.abs(v[first]));
  let sum = 0;
  for (let i = first; i < n; i++) {
    v[i] /= largest;
    sum += v[i] * v[i];
  }
  const length = v[first] < 0 ? -Math.sqrt(sum) : Math.sqrt(sum);
  v[first] += length;
  return 1 / (length * v[first]);
}

/** (I − weight·v·vᵀ)·A in place, for a matrix of n columns. */
export function reflectFromLeft(
  data: Float64Array,
  n: number,
  v: Float64Array,
  weight: number,
  first: number,
): void {
  for (let j = 0; j < n; j++) {
    let sum = 0;
    for (let i = first; i < n; i++) sum += v[i] * data[i * n + j];
    if (sum === 0) continue;
    sum *= weight;
    for (let i = first; i < n; i++) data[i * n + j] -= sum * v[i];
  }
}

/** A·(I − weight·v·vᵀ) in place, for a matrix of n columns. */
export function reflectFromRight(
  data: Float64Array,
  n: number,
  v: Float64Array,
  weight: number,
  first: number,
): void {
  for (let start = 0; start < data.length; start += n) {
    let sum = 0;
    for (let j = first; j < n; j++) sum += data[start + j] * v[j];
    if (sum === 0) continue;
    sum *= weight;
    for (let j = first; j < n; j++) data[start + j] -= sum * v[j];
  }
}
