/**
 * Coefficients of a linearly implicit method of order four with four stages, L-stable (Hairer and Wanner, 'Solving Ordinary
 * Differential Equations II', 1996, section IV.7; from memory: a test shows their order, and that they belong to this gamma).
 */
const gamma = 0.57282;
const a21 = 2;
const a31 = 1.867943637803922;
const a32 = 0.2344449711399156;
const c21 = -7.13761503641231;
const c31 = 2.580708087951457;
const c32 = 0.6515950076447975;
const c41 = -2.137148994382534;
const c42 = -0.3214669691237626;
const c43 = -0.6949742501781779;
const m1 = 2.255570073418735;
const m2 = 0.2870493262186792;
const m3 = 0.435317943184018;
const m4 = 1.093502252409163;
/** Less those of the method of order three with the same stages. */
const e1 = -0.2815431932141155;
const e2 = -0.0727619912493492;
const e3 = -0.1082196201495311;
const e4 = -1.093502252409163;

/** Rates of the states and their slopes in the states, row by row, both from the array of a running plant. */
export interface RatesAndSlopes {
  rates: (m: Float64Array, rates: Float64Array) => void;
  slopes: (m: Float64Array, slopes: Float64Array) => void;
}

/**
 * A step for plants with fast poles next to slow ones: stable however long it is, so that its length follows what moves, not
 * what has died out. All but the states stays constant.
 * @param first place of the first state in the array.
 * @returns the step; it leaves in `error` by how much a method of order three differs from it, and returns false, with nothing
 * moved, where its equations have no solution because a slope is not finite.
 */
export function stiffStep(
  { rates, slopes }: RatesAndSlopes,
  first: number,
  count: number,
): (m: Float64Array, h: number, error: Float64Array) => boolean {
  const start = new Float64Array(count);
  const rate = new Float64Array(count);
  const matrix = new Float64Array(count * count);
  const pivots = new Int32Array(count);
  const [k1, k2, k3, k4] = [0, 1, 2, 3].map(() => new Float64Array(count));
  return (m, h, error) => {
    start.set(m.subarray(first, first + count));
    slopes(m, matrix);
    for (let i = 0; i < matrix.length; i++) matrix[i] = -matrix[i];
    for (let i = 0; i < count; i++) matrix[i * count + i] += 1 / (gamma * h);
    if (!factorise(matrix, pivots, count)) return false;
    rates(m, rate);
    for (let i = 0; i < count; i++) k1[i] = rate[i];
    substitute(matrix, pivots, k1);
    for (let i = 0; i < count; i++) m[first + i] = start[i] + a21 * k1[i];
    rates(m, rate);
    for (let i = 0; i < count; i++) k2[i] = rate[i] + (c21 / h) * k1[i];
    substitute(matrix, pivots, k2);
    for (let i = 0; i < count; i++) m[first + i] = start[i] + a31 * k1[i] + a32 * k2[i];
    rates(m, rate);
    for (let i = 0; i < count; i++) k3[i] = rate[i] + (c31 * k1[i] + c32 * k2[i]) / h;
    substitute(matrix, pivots, k3);
    for (let i = 0; i < count; i++) k4[i] = rate[i] + (c41 * k1[i] + c42 * k2[i] + c43 * k3[i]) / h;
    substitute(matrix, pivots, k4);
    for (let i = 0; i < count; i++) {
      m[first + i] = start[i] + m1 * k1[i] + m2 * k2[i] + m3 * k3[i] + m4 * k4[i];
      error[i] = e1 * k1[i] + e2 * k2[i] + e3 * k3[i] + e4 * k4[i];
    }
    return true;
  };
}

/** LU factors in place, with row exchanges; false when the matrix is singular or not finite. */
function factorise(a: Float64Array, pivots: Int32Array, n: number): boolean {
  for (let k = 0; k < n; k++) {
    let pivot = k;
    for (let i = k + 1; i < n; i++) if (Math.abs(a[i * n + k]) > Math.abs(a[pivot * n + k])) pivot = i;
    pivots[k] = pivot;
    const size = a[pivot * n + k];
    if (size === 0 || !Number.isFinite(size)) return false;
    if (pivot !== k) exchangeRows(a, n, k, pivot);
    for (let i = k + 1; i < n; i++) {
      const factor = a[i * n + k] / size;
      a[i * n + k] = factor;
      if (factor !== 0) for (let j = k + 1; j < n; j++) a[i * n + j] -= factor * a[k * n + j];
    }
  }
  return true;
}

function exchangeRows(a: Float64Array, n: number, i: number, k: number): void {
  for (let j = 0; j < n; j++) {
    const kept = a[i * n + j];
    a[i * n + j] = a[k * n + j];
    a[k * n + j] = kept;
  }
}

function substitute(a: Float64Array, pivots: Int32Array, x: Float64Array): void {
  const n = x.length;
  for (let k = 0; k < n; k++) {
    const kept = x[pivots[k]];
    x[pivots[k]] = x[k];
    x[k] = kept;
  }
  for (let i = 1; i < n; i++) for (let j = 0; j < i; j++) x[i] -= a[i * n + j] * x[j];
  for (let i = n - 1; i >= 0; i--) {
    for (let j = i + 1; j < n; j++) x[i] -= a[i * n + j] * x[j];
    x[i] /= a[i * n + i];
  }
}
