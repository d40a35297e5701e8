/**
 * Polynomials on 0 … 1 by their control points (Bernstein 1912): the polynomial of degree n with points p is
 * Σ pᵢ·C(n, i)·sⁱ·(1 − s)ⁿ⁻ⁱ. It starts at the first point, ends at the last, and stays between the least and the greatest.
 */
export type ControlPoints = ArrayLike<number>;

/** Room for one evaluation: there are so many that arrays of their own would be a burden. */
const scratch = new Float64Array(16);

/** The value at s, by repeated interpolation (de Casteljau 1959): exact at both ends, and everywhere where it is constant. */
export function valueAt(points: ControlPoints, s: number): number {
  const last = points.length - 1;
  if (s === 0) return points[0];
  if (s === 1) return points[last];
  const work = scratch.length > last ? scratch : Array.from(points);
  for (let i = 0; i <= last; i++) work[i] = points[i];
  for (let left = last; left > 0; left--) {
    for (let i = 0; i < left; i++) work[i] += s * (work[i + 1] - work[i]);
  }
  return work[0];
}

/** The control points of the part between two places a ≤ b of 0 … 1, itself on 0 … 1. */
export function partOf(points: ControlPoints, a: number, b: number): number[] {
  const upToEnd = b === 1 ? Array.from(points) : firstPart(points, b);
  return a === 0 ? upToEnd : firstPart(upToEnd.reverse(), 1 - a / b).reverse();
}

function firstPart(points: ControlPoints, s: number): number[] {
  const work = Array.from(points);
  const part = [work[0]];
  for (let left = work.length - 1; left > 0; left--) {
    for (let i = 0; i < left; i++) work[i] += s * (work[i + 1] - work[i]);
    part.push(work[0]);
  }
  return part;
}

/** Differences of neighbours: the control points of the derivative over s, divided by the degree. */
export function differences(points: ControlPoints): number[] {
  const found = new Array<number>(points.length - 1);
  for (let i = 0; i < found.length; i++) found[i] = points[i + 1] - points[i];
  return found;
}

/** Halvings after which two zeros are told apart no more: the last bit of s. */
const mostHalvings = 52;

/**
 * The places inside 0 … 1 where the polynomial changes sign, in order: parts with one change among their control points
 * have one zero, others are halved (variation diminishing; Lane and Riesenfeld 1981).
 */
export function signChanges(points: ControlPoints): number[] {
  const found: number[] = [];
  if (countChanges(points) > 0) collect(Array.from(points), 0, 1, 0, found);
  return found;
}

function collect(points: number[], from: number, to: number, depth: number, found: number[]): void {
  const changes = countChanges(points);
  if (changes === 0) return;
  const middle = (from + to) / 2;
  if (depth === mostHalvings) {
    if (changes % 2 === 1) found.push(middle);
    return;
  }
  if (changes === 1 && points[0] * points[points.length - 1] < 0) {
    found.push(from + (to - from) * zeroOf(points));
    return;
  }
  const [left, right] = halves(points);
  collect(left, from, middle, depth + 1, found);
  // A zero in the very middle belongs to neither half.
  if (right[0] === 0 && signBefore(left) * signAfter(right) < 0) found.push(middle);
  collect(right, middle, to, depth + 1, found);
}

/** Both halves from one scheme, so that the value in the middle is the same number in both. */
function halves(points: readonly number[]): [number[], number[]] {
  const work = [...points];
  const [left, right] = [[work[0]], [work[work.length - 1]]];
  for (let count = work.length - 1; count > 0; count--) {
    for (let i = 0; i < count; i++) work[i] += (work[i + 1] - work[i]) / 2;
    left.push(work[0]);
    right.push(work[count - 1]);
  }
  return [left, right.reverse()];
}

function countChanges(points: ControlPoints): number {
  let changes = 0;
  let sign = 0;
  for (let i = 0; i < points.length; i++) {
    const next = Math.sign(points[i]);
    if (next === 0 || Number.isNaN(next)) continue;
    if (sign !== 0 && next !== sign) changes++;
    sign = next;
  }
  return changes;
}

function signBefore(points: readonly number[]): number {
  return Math.sign(points.findLast((point) => point !== 0) ?? 0);
}

function signAfter(points: readonly number[]): number {
  return Math.sign(points.find((point) => point !== 0) ?? 0);
}

/** The one zero of a polynomial with different signs at its ends, to the last bit (bisection). */
function zeroOf(points: readonly number[]): number {
  let [a, b] = [0, 1];
  const rising = points[0] < 0;
  for (let round = 0; round < 100; round++) {
    const middle = a + (b - a) / 2;
    if (middle <= a || middle >= b) break;
    if (valueAt(points, middle) < 0 === rising) a = middle;
    else b = middle;
  }
  return b;
}

/** The integral over 0 … 1: the mean of the control points. */
export function integralOf(points: ControlPoints): number {
  let sum = 0;
  for (let i = 0; i < points.length; i++) sum += points[i];
  return sum / points.length;
}

/** The product of two polynomials, of the degree of both together. */
export function productOf(a: ControlPoints, b: ControlPoints): number[] {
  const [m, n] = [a.length - 1, b.length - 1];
  const product = new Array<number>(m + n + 1).fill(0);
  for (let i = 0; i <= m; i++) {
    for (let j = 0; j <= n; j++) product[i + j] += binomial(m, i) * binomial(n, j) * a[i] * b[j];
  }
  return product.map((sum, k) => sum / binomial(m + n, k));
}

const pascal: number[][] = [[1]];

function binomial(n: number, k: number): number {
  while (pascal.length <= n) {
    const row = pascal[pascal.length - 1];
    pascal.push([1, ...row.slice(1).map((entry, i) => entry + row[i]), 1]);
  }
  return pascal[n][k];
}
