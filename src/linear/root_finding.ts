import { NumericFailure } from './numeric_failure.js';

const MOST_ROUNDS = 200;

/**
 * A zero of f between a and b, to double precision, where f(a) and f(b) differ in sign: inverse quadratic steps where
 * they are safe, else halving (Chandrupatla, 1997).
 * @throws NumericFailure when f has the same sign at both ends or gives something that is not a number.
 */
export function rootBetween(f: (x: number) => number, a: number, b: number): number {
  let x1 = b;
  let x2 = a;
  let f1 = f(b);
  let f2 = f(a);
  if (f1 === 0) return b;
  if (f2 === 0) return a;
  if (!(f1 > 0 !== f2 > 0))
    throw new NumericFailure(`no change of sign between ${a} (${f2}) and ${b} (${f1})`);
  let share = 0.5;
  for (let round = 0; round < MOST_ROUNDS; round++) {
    const x = x1 + share * (x2 - x1);
    const value = f(x);
    if (Number.isNaN(value)) break;
    let x3 = x1;
    let f3 = f1;
    if (value > 0 !== f1 > 0) {
      x3 = x2;
      f3 = f2;
      x2 = x1;
      f2 = f1;
    }
    x1 = x;
    f1 = value;
    const best = Math.abs(f1) < Math.abs(f2) ? x1 : x2;
    const finest = (2 * Number.EPSILON * Math.abs(best) + Number.MIN_VALUE) / Math.abs(x2 - x1);
    if (f1 === 0 || finest > 0.5) return best;
    share = Math.min(1 - finest, Math.max(finest, nextShare(x1, x2, x3, f1, f2, f3)));
  }
  throw new NumericFailure(`the zero between ${a} and ${b} was not found in ${MOST_ROUNDS} rounds`);
}

/** Where to look next, as a share of the way from x1 to x2. */
function nextShare(x1: number, x2: number, x3: number, f1: number, f2: number, f3: number): number {
  const xi = (x1 - x2) / (x3 - x2);
  const phi = (f1 - f2) / (f3 - f2);
  if (!(phi * phi < xi && (1 - phi) * (1 - phi) < 1 - xi)) return 0.5;
  return (f1 / (f2 - f1)) * (f3 / (f2 - f3)) + ((x3 - x1) / (x2 - x1)) * (f1 / (f3 - f1)) * (f2 / (f3 - f2));
}

const GOLDEN = (3 - Math.sqrt(5)) / 2;

/**
 * A point between a and b where f, positive at both ends with a dip between, is zero or negative; undefined when the dip
 * stays above zero. It shrinks the interval by golden sections (Kiefer, 1953) and stops at the first such point.
 */
export function dipBelowZero(f: (x: number) => number, a: number, b: number): number | undefined {
  let left = a;
  let right = b;
  let x1 = left + GOLDEN * (right - left);
  let x2 = right - GOLDEN * (right - left);
  let f1 = f(x1);
  let f2 = f(x2);
  for (let round = 0; round < 40; round++) {
    if (f1 <= 0) return x1;
    if (f2 <= 0) return x2;
    if (f1 < f2) {
      right = x2;
      x2 = x1;
      f2 = f1;
      x1 = left + GOLDEN * (right - left);
      f1 = f(x1);
    } else {
      left = x1;
      x1 = x2;
      f1 = f2;
      x2 = right - GOLDEN * (right - left);
      f2 = f(x2);
    }
  }
  return undefined;
}
