import { uniformFloat64 } from 'pure-rand/distribution/uniformFloat64';
import { xoroshiro128plus } from 'pure-rand/generator/xoroshiro128plus';

/**
 * A seeded sequence of independent draws from the standard normal distribution (Box and Muller 1958). The same seed and
 * source always give the same sequence, so that every plant meets the same noise.
 */
export function standardNormal(seed: number, source: number, count: number): Float64Array {
  const generator = xoroshiro128plus(Math.imul(seed, 0x9e3779b1) ^ Math.imul(source + 1, 0x85ebca6b));
  const draws = new Float64Array(count);
  for (let i = 0; i < count; i += 2) {
    // 1 − u is above zero, so that the logarithm is finite.
    const radius = Math.sqrt(-2 * Math.log(1 - uniformFloat64(generator)));
    const angle = 2 * Math.PI * uniformFloat64(generator);
    draws[i] = radius * Math.cos(angle);
    if (i + 1 < count) draws[i + 1] = radius * Math.sin(angle);
  }
  return draws;
}
