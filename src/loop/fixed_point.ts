import { overflows, roundings } from '../spec/fixed_formats.js';

/** Added to the code of an overflow rule: the operation then gives the number of its overflows instead of its result. */
export const counting = overflows.length;

/** A number that a step of 2^-n divides, with the step that is below it, and how far above it the exact number was. */
type Cut = { base: number; rest: number };

/**
 * A number brought into a fixed-point format.
 * @param x exact, and less than 2^53 of its own smallest steps.
 * @param step value of the format's last bit.
 * @param low lowest number of the format; its numbers are `low` … `low + size - step`.
 */
export function fit(
  x: number,
  step: number,
  rounding: number,
  low: number,
  size: number,
  overflow: number,
): number {
  const base = Math.floor(x / step) * step;
  const rounded = base === x ? x : base + carry({ base, rest: x - base }, step, rounding, x < 0);
  return intoRange(rounded, step, low, size, overflow);
}

/**
 * The sum of products x₀·y₀ + x₁·y₁ + … from left to right in an accumulator, then brought into a format as `fit` does: exact
 * for factors of up to 32 significant bits and accumulators of up to 64 bits, where float64 arithmetic alone is not.
 * The sum is kept in two parts: `high`, a multiple of 2^16 units (less where the accumulator is that small), and `low`, from 0
 * to below that.
 * @param unit value of the accumulator's last bit; every product is a multiple of it.
 * @param accumulatorLow lowest number of the accumulator.
 * @param accumulatorSize distance from the lowest number to the first above the highest; 0 for a single product that is kept
 * whole.
 */
export function fitSum(
  step: number,
  rounding: number,
  formatLow: number,
  formatSize: number,
  overflow: number,
  unit: number,
  accumulatorLow: number,
  accumulatorSize: number,
  ...factors: number[]
): number {
  const wide = accumulatorSize === 0 ? unit * 65536 : Math.min(unit * 65536, accumulatorSize / 2);
  const saturates = overflow % counting === 0;
  let [high, low, passed] = [0, 0, 0];
  for (let at = 0; at < factors.length; at += 2) {
    const [upper, lower] = halves(factors[at + 1]);
    const product = factors[at] * upper;
    const whole = Math.floor(product / wide) * wide;
    low += product - whole + factors[at] * lower;
    const carried = Math.floor(low / wide) * wide;
    high += whole + carried;
    low -= carried;
    if (accumulatorSize === 0 || (high >= accumulatorLow && high < accumulatorLow + accumulatorSize))
      continue;
    passed++;
    if (!saturates) high -= accumulatorSize * Math.floor((high - accumulatorLow) / accumulatorSize);
    else if (high < accumulatorLow) [high, low] = [accumulatorLow, 0];
    else [high, low] = [accumulatorLow + accumulatorSize - wide, wide - unit];
  }
  const cut = step >= wide ? cutAt(high, step) : cutAt(low, step);
  if (step >= wide) cut.rest += low;
  const rounded = cut.base + (cut.rest > 0 ? carry(cut, step, rounding, high < 0) : 0);
  const [more, less] = step >= wide ? [rounded, 0] : [high, rounded];
  const result = joined(more, less, step, formatLow, formatSize, overflow);
  return overflow < counting ? result : result + passed;
}

/** The quotient x / y cut toward zero, as C's division of integers does, then kept in the format as `fit` does. */
export function fitQuotient(
  x: number,
  y: number,
  step: number,
  low: number,
  size: number,
  overflow: number,
): number {
  const divisor = y * step;
  // The remainder is exact, and the quotient of what it leaves is a whole number up to a small error.
  const steps = Math.round((x - (x % divisor)) / divisor);
  if (Math.abs(steps) < 2 ** 51 || overflow % counting === 0 || !Number.isFinite(steps)) {
    return intoRange(steps * step, step, low, size, overflow);
  }
  if (overflow >= counting) return 1;
  const whole = (of: number): bigint => BigInt(Math.round(of * 2 ** 62));
  const bits = Math.log2(size / step);
  const quotient = (whole(x) * BigInt(1 / step)) / whole(y);
  const left = low < 0 ? BigInt.asIntN(bits, quotient) : BigInt.asUintN(bits, quotient);
  return Number(left) * step;
}

/** Two parts of a number of up to 32 significant bits, of at most 16 bits each (Veltkamp 1968). */
function halves(x: number): [number, number] {
  const turned = (2 ** 37 + 1) * x;
  const upper = turned - (turned - x);
  return [upper, x - upper];
}

function cutAt(x: number, step: number): Cut {
  const base = Math.floor(x / step) * step;
  return { base, rest: x - base };
}

/** One step where the rule rounds up what lies between two numbers of the format, else nothing. */
function carry({ base, rest }: Cut, step: number, rounding: number, negative: boolean): number {
  switch (roundings[rounding]) {
    case 'truncate':
      return 0;
    case 'toward_zero':
      return negative ? step : 0;
    case 'nearest':
      return rest >= step / 2 ? step : 0;
    case 'half_even':
      return rest > step / 2 || (rest === step / 2 && (base / step) % 2 !== 0) ? step : 0;
  }
}

/** Both parts of a sum together, kept in the format; parts too large for their sum to be exact are reduced first. */
function joined(
  high: number,
  low: number,
  step: number,
  from: number,
  size: number,
  overflow: number,
): number {
  const wraps = overflows[overflow] === 'wrap';
  return intoRange((wraps ? high - size * Math.floor(high / size) : high) + low, step, from, size, overflow);
}

function intoRange(x: number, step: number, low: number, size: number, overflow: number): number {
  const outside = x < low || x >= low + size;
  if (overflow >= counting) return outside ? 1 : 0;
  // The integers of the target have no negative zero.
  if (!outside) return x + 0;
  if (overflows[overflow] === 'wrap') return x - size * Math.floor((x - low) / size);
  return x < low ? low : low + size - step;
}
