/** An exact positive or zero ratio of integers. */
export interface Fraction {
  numerator: bigint;
  denominator: bigint;
}

/**
 * The simplest ratio within a few rounding errors of a number: 0.0004 is 1/2500 and 1/30000 s is itself. Instants
 * which the spec means to coincide then do so exactly. Continued fraction expansion (Khinchin 1935).
 * @throws {RangeError} for a negative or non-finite number.
 */
export function asFraction(x: number): Fraction {
  if (!(x >= 0) || !Number.isFinite(x))
    throw new RangeError(`${x} is no time: expected a number of at least 0`);
  let [h0, h1, k0, k1] = [0n, 1n, 1n, 0n];
  let rest = x;
  for (let round = 0; round < 64; round++) {
    const whole = Math.floor(rest);
    [h0, h1] = [h1, BigInt(whole) * h1 + h0];
    [k0, k1] = [k1, BigInt(whole) * k1 + k0];
    if (Math.abs(Number(h1) / Number(k1) - x) <= 4 * Number.EPSILON * x) break;
    rest = 1 / (rest - whole);
  }
  return { numerator: h1, denominator: k1 };
}

function greatestCommonDivisor(a: bigint, b: bigint): bigint {
  let [x, y] = [a, b];
  while (y > 0n) [x, y] = [y, x % y];
  return x;
}

/** The least common multiple of positive integers. */
export function leastCommonMultiple(values: readonly bigint[]): bigint {
  return values.reduce((a, b) => (a / greatestCommonDivisor(a, b)) * b, 1n);
}
