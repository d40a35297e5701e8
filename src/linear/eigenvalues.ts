import { balance } from './balance.js';
import type { Complex } from './complex.js';
import { reduceToHessenberg } from './hessenberg.js';
import { euclideanNorm, type Matrix, shape } from './matrix.js';
import { NumericFailure } from './numeric_failure.js';

/**
 * The eigenvalues of a real square matrix, each as often as its multiplicity, complex ones in conjugate pairs, in no
 * particular order: balancing (Parlett and Reinsch, 1969), Hessenberg form, shifted QR in real arithmetic (Francis,
 * 1961).
 * @throws RangeError when `a` is not square, NumericFailure when an entry is not finite or the iteration meets its cap.
 */
export function eigenvalues(a: Matrix): Complex[] {
  if (a.rows !== a.columns) throw new RangeError(`a matrix of ${shape(a)} has no eigenvalues`);
  const bad = a.data.findIndex((entry) => !Number.isFinite(entry));
  if (bad >= 0) {
    const place = `(${Math.floor(bad / a.columns)}, ${bad % a.columns})`;
    throw new NumericFailure(
      `entry ${place} of a matrix of ${shape(a)} is ${a.data[bad]}, a finite number was expected`,
    );
  }
  const h = a.data.slice();
  const size = powerOfTwoNear(h);
  for (let i = 0; i < h.length; i++) h[i] /= size;
  balance(h, a.rows);
  reduceToHessenberg(h, a.rows);
  const found = eigenvaluesOfHessenberg(h, a.rows);
  return size === 1
    ? found
    : found.map(({ real, imaginary }) => ({ real: size * real, imaginary: size * imaginary }));
}

/** 1, or a power of two near the largest entry where that is so large or small that products of entries leave the range. */
function powerOfTwoNear(entries: Float64Array): number {
  let largest = 0;
  for (const entry of entries) largest = Math.max(largest, Math.abs(entry));
  if (largest === 0 || (largest > 1e-60 && largest < 1e60)) return 1;
  return 2 ** Math.max(-1000, Math.min(1000, Math.round(Math.log2(largest))));
}

/** Most QR steps for one eigenvalue. Two or three are usual. */
const MOST_STEPS = 90;
/** After so many steps an entry may be dropped that is negligible against the whole matrix, not only its neighbours. */
const PATIENCE = 30;

/**
 * The eigenvalues of an upper Hessenberg matrix, which is destroyed.
 * @param h n × n, row by row.
 * @throws NumericFailure when the iteration meets its cap.
 */
export function eigenvaluesOfHessenberg(h: Float64Array, n: number): Complex[] {
  const found: Complex[] = [];
  const rounding = Number.EPSILON * euclideanNorm(h);
  let last = n - 1;
  let steps = 0;
  while (last >= 0) {
    const first = startOfBlock(h, n, last, steps > PATIENCE ? rounding : 0);
    if (last - first > 1) {
      if (++steps > MOST_STEPS) {
        throw new NumericFailure(
          `the eigenvalues of a matrix of ${n} x ${n} were not found: ${MOST_STEPS} steps left ${last + 1} of them open`,
        );
      }
      shiftedStep(h, n, first, last, steps % 10 === 0);
      continue;
    }
    if (first === last) found.push({ real: h[last * n + last], imaginary: 0 });
    else pushPair(found, h, n, first);
    last = first - 1;
    steps = 0;
  }
  return found;
}

/** First index of the unreduced block that ends at `last`; the negligible entry before it is set to zero. */
function startOfBlock(h: Float64Array, n: number, last: number, rounding: number): number {
  for (let k = last; k > 0; k--) {
    if (Math.abs(h[k * n + k - 1]) <= rounding || isNegligible(h, n, k)) {
      h[k * n + k - 1] = 0;
      return k;
    }
  }
  return 0;
}

/** Whether the subdiagonal entry left of diagonal entry k may be dropped (Ahues and Tisseur, 1997). */
function isNegligible(h: Float64Array, n: number, k: number): boolean {
  const here = h[k * n + k];
  const above = h[(k - 1) * n + k - 1];
  const below = Math.abs(h[k * n + k - 1]);
  if (below <= Number.MIN_VALUE / Number.EPSILON) return true;
  if (below > Number.EPSILON * (Math.abs(here) + Math.abs(above))) return false;
  const across = Math.abs(h[(k - 1) * n + k]);
  const larger = Math.max(Math.abs(here), Math.abs(above - here));
  const smaller = Math.min(Math.abs(here), Math.abs(above - here));
  const total = larger + Math.max(below, across);
  return (
    Math.min(below, across) * (Math.max(below, across) / total) <= Number.EPSILON * smaller * (larger / total)
  );
}

function pushPair(found: Complex[], h: Float64Array, n: number, k: number): void {
  const corner = h[(k + 1) * n + k + 1];
  const half = (h[k * n + k] - corner) / 2;
  const product = h[k * n + k + 1] * h[(k + 1) * n + k];
  const square = half * half + product;
  if (square < 0) {
    const imaginary = Math.sqrt(-square);
    found.push({ real: corner + half, imaginary }, { real: corner + half, imaginary: -imaginary });
    return;
  }
  const far = half + (half < 0 ? -Math.sqrt(square) : Math.sqrt(square));
  found.push({ real: corner + far, imaginary: 0 });
  found.push({ real: far === 0 ? corner : corner - product / far, imaginary: 0 });
}

/** One QR step with both eigenvalues of the trailing 2 × 2 block as shifts, done as a chase of a bulge of three rows. */
function shiftedStep(h: Float64Array, n: number, first: number, last: number, exceptional: boolean): void {
  let x = h[last * n + last];
  let y = h[(last - 1) * n + last - 1];
  let w = h[last * n + last - 1] * h[(last - 1) * n + last];
  const half = (y - x) / 2;
  const square = half * half + w;
  if (exceptional) {
    // A shift out of the ordinary breaks the rare cycles (Wilkinson, 1965).
    const size = Math.abs(h[last * n + last - 1]) + Math.abs(h[(last - 1) * n + last - 2]);
    x = y = h[last * n + last] + 0.75 * size;
    w = -0.4375 * size * size;
  } else if (square >= 0) {
    // Of two real shifts the one nearer to the corner is taken twice: with both the step can stand still.
    x -= half === 0 ? -Math.sqrt(w) : w / (half + (half < 0 ? -Math.sqrt(square) : Math.sqrt(square)));
    y = x;
    w = 0;
  }
  let p = 0;
  let q = 0;
  let r = 0;
  let k = last - 2;
  for (; ; k--) {
    const z = h[k * n + k];
    p = ((x - z) * (y - z) - w) / h[(k + 1) * n + k] + h[k * n + k + 1];
    q = h[(k + 1) * n + k + 1] - z - (x - z) - (y - z);
    r = h[(k + 2) * n + k + 1];
    if (k === first || mayStartAt(h, n, k, p, q, r)) break;
  }
  chaseBulge(h, n, first, k, last, p, q, r);
}

/** Whether two small subdiagonal entries in a row let the step start at row k. */
function mayStartAt(h: Float64Array, n: number, k: number, p: number, q: number, r: number): boolean {
  const neighbours =
    Math.abs(h[(k - 1) * n + k - 1]) + Math.abs(h[k * n + k]) + Math.abs(h[(k + 1) * n + k + 1]);
  const lost = Math.abs(h[k * n + k - 1]) * (Math.abs(q) + Math.abs(r));
  return lost <= Number.EPSILON * Math.abs(p) * neighbours;
}

function chaseBulge(
  h: Float64Array,
  n: number,
  first: number,
  start: number,
  last: number,
  p: number,
  q: number,
  r: number,
): void {
  for (let k = start; k < last; k++) {
    const three = k < last - 1;
    if (k > start) {
      p = h[k * n + k - 1];
      q = h[(k + 1) * n + k - 1];
      r = three ? h[(k + 2) * n + k - 1] : 0;
    } else if (!three) r = 0;
    const size = Math.abs(p) + Math.abs(q) + Math.abs(r);
    if (size === 0) continue;
    p /= size;
    q /= size;
    r /= size;
    const length = p < 0 ? -Math.sqrt(p * p + q * q + r * r) : Math.sqrt(p * p + q * q + r * r);
    if (k > start) {
      h[k * n + k - 1] = -length * size;
      h[(k + 1) * n + k - 1] = 0;
      if (three) h[(k + 2) * n + k - 1] = 0;
    } else if (k > first) {
      h[k * n + k - 1] = -h[k * n + k - 1];
    }
    p += length;
    reflectThree(h, n, first, k, last, p / length, q / length, r / length, q / p, r / p);
  }
}

/** Applies I − (x, y, z)ᵀ·(1, q, r) to rows and columns k … k + 2 of the active block. */
function reflectThree(
  h: Float64Array,
  n: number,
  first: number,
  k: number,
  last: number,
  x: number,
  y: number,
  z: number,
  q: number,
  r: number,
): void {
  const row0 = k * n;
  const row1 = row0 + n;
  if (k === last - 1) {
    for (let j = k; j <= last; j++) {
      const t = h[row0 + j] + q * h[row1 + j];
      h[row0 + j] -= t * x;
      h[row1 + j] -= t * y;
    }
    for (let i = first * n + k; i <= last * n + k; i += n) {
      const t = x * h[i] + y * h[i + 1];
      h[i] -= t;
      h[i + 1] -= t * q;
    }
    return;
  }
  const row2 = row1 + n;
  for (let j = k; j <= last; j++) {
    const t = h[row0 + j] + q * h[row1 + j] + r * h[row2 + j];
    h[row0 + j] -= t * x;
    h[row1 + j] -= t * y;
    h[row2 + j] -= t * z;
  }
  const end = Math.min(last, k + 3) * n + k;
  for (let i = first * n + k; i <= end; i += n) {
    const t = x * h[i] + y * h[i + 1] + z * h[i + 2];
    h[i] -= t;
    h[i + 1] -= t * q;
    h[i + 2] -= t * r;
  }
}
