/** A closed interval: all numbers from the first to the second. */
export type Interval = readonly [low: number, high: number];

/** One unit in the last place and more, also for the smallest numbers: what rounding to nearest can be off by. */
const relative = 2 ** -52;

/** A number not above the exact result that was rounded to x. */
export function down(x: number): number {
  return x - (Math.abs(x) * relative + Number.MIN_VALUE);
}

/** A number not below the exact result that was rounded to x. */
export function up(x: number): number {
  return x + (Math.abs(x) * relative + Number.MIN_VALUE);
}

/** How far the functions of the standard library may be off, in units in the last place, generously. */
const libraryError = 8 * relative;

/** Bounds for a result of Math.exp and its like. */
export function widened(low: number, high: number): Interval {
  return [
    low - (Math.abs(low) * libraryError + Number.MIN_VALUE),
    high + (Math.abs(high) * libraryError + Number.MIN_VALUE),
  ];
}

/** Whether it is exactly zero. */
export const isZero = ([low, high]: Interval): boolean => low === 0 && high === 0;

/** Every sum of a number of each. */
export function sum(a: Interval, b: Interval): Interval {
  if (isZero(a)) return b;
  return isZero(b) ? a : [down(a[0] + b[0]), up(a[1] + b[1])];
}

/** The negatives of its numbers; nothing is rounded. */
export const negated = ([low, high]: Interval): Interval => [-high, -low];

/** Every difference of a number of each. */
export function difference(a: Interval, b: Interval): Interval {
  return sum(a, negated(b));
}

/** Every product of a number of each; an exact zero gives an exact zero. */
export function product(a: Interval, b: Interval): Interval {
  if (isZero(a) || isZero(b)) return [0, 0];
  if (a[0] === 1 && a[1] === 1) return b;
  if (b[0] === 1 && b[1] === 1) return a;
  const [p, q, r, s] = [a[0] * b[0], a[0] * b[1], a[1] * b[0], a[1] * b[1]];
  return [down(Math.min(p, q, r, s)), up(Math.max(p, q, r, s))];
}

/** The quotient; everything where the divisor holds zero. */
export function quotient(a: Interval, b: Interval): Interval {
  if (b[0] <= 0 && b[1] >= 0) return everything;
  if (isZero(a)) return [0, 0];
  const [p, q, r, s] = [a[0] / b[0], a[0] / b[1], a[1] / b[0], a[1] / b[1]];
  return [down(Math.min(p, q, r, s)), up(Math.max(p, q, r, s))];
}

/** Nothing is known. */
export const everything: Interval = [Number.NEGATIVE_INFINITY, Number.POSITIVE_INFINITY];

/** What lies in both; the first where they seem to have nothing in common, which only rounding of bounds could feign. */
export function common(a: Interval, b: Interval): Interval {
  const low = Math.max(a[0], b[0]);
  const high = Math.min(a[1], b[1]);
  return low <= high ? [low, high] : a;
}

/** The greatest size in the interval. */
export function size([low, high]: Interval): number {
  return Math.max(Math.abs(low), Math.abs(high));
}
