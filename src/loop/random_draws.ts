import { uniformFloat64 } from 'pure-rand/distribution/uniformFloat64';
import { xoroshiro128plus } from 'pure-rand/generator/xoroshiro128plus';

function generatorOf(seed: number, source: number): ReturnType<typeof xoroshiro128plus> {
  return xoroshiro128plus(Math.imul(seed, 0x9e3779b1) ^ Math.imul(source + 1, 0x85ebca6b));
}

/** A seeded sequence of independent draws, uniform from 0 to 1. */
export function uniformDraws(seed: number, source: number, count: number): Float64Array {
  const generator = generatorOf(seed, source);
  return Float64Array.from({ length: count }, () => uniformFloat64(generator));
}

/**
 * A seeded sequence of independent draws from the standard normal distribution (Box and Muller 1958). The same seed and
 * source always give the same sequence, so that every plant meets the same noise.
 */
export function standardNormal(seed: number, source: number, count: number): Float64Array {
  const generator = generatorOf(seed, source);
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

/**
 * The value below which a standard normal draw falls with probability p, 0 < p < 1: bisection on the distribution function,
 * whose integral is summed by Simpson's rule; good to 1e-9, which is finer than any share of lost samples is known.
 */
export function normalQuantile(p: number): number {
  if (p > 0.5) return -normalQuantile(1 - p);
  let [low, high] = [-9, 0];
  for (let round = 0; round < 60; round++) {
    const middle = (low + high) / 2;
    if (0.5 - densityIntegral(-middle) < p) low = middle;
    else high = middle;
  }
  return (low + high) / 2;
}

/** Integral of the standard normal density from 0 to x ≥ 0. */
function densityIntegral(x: number): number {
  const steps = 400;
  const h = x / steps;
  const density = (t: number): number => Math.exp((-t * t) / 2) / Math.sqrt(2 * Math.PI);
  let sum = density(0) + density(x);
  for (let i = 1; i < steps; i++) sum += density(i * h) * (i % 2 === 0 ? 2 : 4);
  return (sum * h) / 3;
}
