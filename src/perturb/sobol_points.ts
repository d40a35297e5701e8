/** Dimensions for which direction numbers are listed. */
export const sobolDimensions = 40;

/**
 * Direction numbers for the second dimension on (Joe and Kuo 2008, their set for two-dimensional projections): degree of
 * the primitive polynomial, its inner coefficients as bits, and the first direction numbers.
 */
// biome-ignore format: a table
const directions: readonly (readonly [degree: number, inner: number, first: readonly number[]])[] = [
  [1, 0, [1]],
  [2, 1, [1, 3]],
  [3, 1, [1, 3, 1]],
  [3, 2, [1, 1, 1]],
  [4, 1, [1, 1, 3, 3]],
  [4, 4, [1, 3, 5, 13]],
  [5, 2, [1, 1, 5, 5, 17]],
  [5, 4, [1, 1, 5, 5, 5]],
  [5, 7, [1, 1, 7, 11, 19]],
  [5, 11, [1, 1, 5, 1, 1]],
  [5, 13, [1, 1, 1, 3, 11]],
  [5, 14, [1, 3, 5, 5, 31]],
  [6, 1, [1, 3, 3, 9, 7, 49]],
  [6, 13, [1, 1, 1, 15, 21, 21]],
  [6, 16, [1, 3, 1, 13, 27, 49]],
  [6, 19, [1, 1, 1, 15, 7, 5]],
  [6, 22, [1, 3, 1, 15, 13, 25]],
  [6, 25, [1, 1, 5, 5, 19, 61]],
  [7, 1, [1, 3, 7, 11, 23, 15, 103]],
  [7, 4, [1, 3, 7, 13, 13, 15, 69]],
  [7, 7, [1, 1, 3, 13, 7, 35, 63]],
  [7, 8, [1, 3, 5, 9, 1, 25, 53]],
  [7, 14, [1, 3, 1, 13, 9, 35, 107]],
  [7, 19, [1, 3, 1, 5, 27, 61, 31]],
  [7, 21, [1, 1, 5, 11, 19, 41, 61]],
  [7, 28, [1, 3, 5, 3, 3, 13, 69]],
  [7, 31, [1, 1, 7, 13, 1, 19, 1]],
  [7, 32, [1, 3, 7, 5, 13, 19, 59]],
  [7, 37, [1, 1, 3, 9, 25, 29, 41]],
  [7, 41, [1, 3, 5, 13, 23, 1, 55]],
  [7, 42, [1, 3, 7, 3, 13, 59, 17]],
  [7, 50, [1, 3, 1, 3, 5, 53, 69]],
  [7, 55, [1, 1, 5, 5, 23, 33, 13]],
  [7, 56, [1, 1, 7, 7, 1, 61, 123]],
  [7, 59, [1, 1, 7, 9, 13, 61, 49]],
  [7, 62, [1, 3, 3, 5, 3, 55, 33]],
  [8, 14, [1, 3, 1, 15, 31, 13, 49, 245]],
  [8, 21, [1, 3, 5, 15, 31, 59, 63, 97]],
  [8, 22, [1, 3, 1, 11, 11, 11, 77, 249]],
];

const bits = 32;

/**
 * Points of the Sobol sequence (Sobol 1967) in the order of the Gray code (Antonov and Saleev 1979), each coordinate from 0
 * up to, not including, 1; the first is the origin. Every block of 2^m points from a multiple of 2^m on fills each
 * one-dimensional projection evenly.
 * @throws {RangeError} for no or more than 40 dimensions.
 */
export function* sobolPoints(dimensions: number): Generator<Float64Array, never> {
  if (!(dimensions >= 1 && dimensions <= sobolDimensions)) {
    throw new RangeError(
      `a Sobol sequence of ${dimensions} dimensions was asked for, expected 1 to ${sobolDimensions}`,
    );
  }
  const numbers = Array.from({ length: dimensions }, (_, i) => directionNumbers(i));
  const state = new Uint32Array(dimensions);
  for (let index = 0; ; index++) {
    yield Float64Array.from(state, (x) => x / 2 ** bits);
    // The place of the lowest zero bit of the index says which direction number is next.
    const place = Math.min(bits - 1, 31 - Math.clz32(~index & (index + 1)));
    for (let i = 0; i < dimensions; i++) state[i] ^= numbers[i][place];
  }
}

/** The direction numbers of one dimension as fractions of 2^32. */
function directionNumbers(dimension: number): Uint32Array {
  if (dimension === 0) return Uint32Array.from({ length: bits }, (_, i) => 2 ** (bits - 1 - i));
  const [degree, inner, first] = directions[dimension - 1];
  const numbers = new Uint32Array(bits);
  for (let i = 0; i < bits; i++) {
    if (i < degree) {
      numbers[i] = first[i] * 2 ** (bits - 1 - i);
      continue;
    }
    let next = numbers[i - degree] ^ (numbers[i - degree] >>> degree);
    for (let k = 1; k < degree; k++) {
      if ((inner >>> (degree - 1 - k)) & 1) next ^= numbers[i - k];
    }
    numbers[i] = next;
  }
  return numbers;
}
