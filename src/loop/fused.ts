const wide = new Float64Array(1);
const words = new Uint32Array(wide.buffer);
/** Which of the two words of a float64 holds its last bit; the other order is that of big-endian machines. */
const lastWord = new Uint8Array(Uint16Array.of(1).buffer)[0] === 1 ? 0 : 1;

/**
 * x·y + z of float32 numbers, rounded once to float32, as the target's fused multiply-add and C's `fmaf` do. The product of
 * two float32 numbers is exact in float64. The sum is not always: its error is found exactly (Knuth 1969, sum without loss)
 * and kept in the last bit (round to odd), so that the final rounding is that of the exact sum (Boldo and Melquiond 2008).
 */
export function fusedMultiplyAdd(x: number, y: number, z: number): number {
  const product = x * y;
  const sum = product + z;
  const part = sum - product;
  const error = product - (sum - part) + (z - part);
  // An infinite sum has no error that is a number, and rounds to itself.
  return Math.fround(error === 0 || !Number.isFinite(sum) ? sum : toOdd(sum, error));
}

/** The odd one of the two float64 numbers between which `sum + error` lies; an odd sum is that one already. */
function toOdd(sum: number, error: number): number {
  wide[0] = sum;
  if ((words[lastWord] & 1) === 1) return sum;
  if (error > 0 === sum > 0) words[lastWord] |= 1;
  else if (words[lastWord] > 0) words[lastWord] -= 1;
  else {
    words[lastWord] = 0xffffffff;
    words[1 - lastWord] -= 1;
  }
  return wide[0];
}
