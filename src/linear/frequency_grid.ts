import type { Complex } from './complex.js';
import { NumericFailure } from './numeric_failure.js';

/** Step as a share of the distance to the nearest pole or zero: its angle then turns by less than about 17° a step. */
const STEP = 0.3;
/** How far the ends go beyond the features nearest to them, as a factor. */
const BEYOND = 64;
/** A pole or zero on the boundary itself is passed in steps of this share of the frequency. */
const FINEST = 1e-8;
/** Features this near to zero frequency, against the largest one, count as lying at it. */
const AT_ZERO = 1e-9;
const MOST_POINTS = 100_000;

/**
 * Frequencies in rad/s, ascending, between which a response with these poles and zeros changes little: the steps are
 * short near each of them and long elsewhere, whatever their scales. Zero frequency and the end (half the sampling
 * frequency, or infinity) are not among them.
 * @param features poles and zeros, of all transfers of interest; z − 1 for sampled systems.
 * @param deadTime pure delay in s (continuous systems), which asks for steps of its own.
 * @throws NumericFailure when the dead time is so long against the poles that the grid would not end.
 */
export function frequencyGrid(
  features: readonly Complex[],
  period: number | undefined,
  deadTime = 0,
): number[] {
  return period === undefined ? continuousGrid(features, deadTime) : sampledGrid(features, period);
}

function sampledGrid(features: readonly Complex[], period: number): number[] {
  const low = nearestTo(features, 0, AT_ZERO, 0.5) / BEYOND;
  const high = Math.PI - nearestTo(features, -2, AT_ZERO, 0.5) / BEYOND;
  const flat = flatten(features);
  const angles = march(low, high, (angle) => {
    const half = Math.sin(angle / 2);
    return nearest(flat, -2 * half * half, Math.sin(angle));
  });
  return angles.map((angle) => angle / period);
}

function continuousGrid(features: readonly Complex[], deadTime: number): number[] {
  let largest = 0;
  for (const { real, imaginary } of features) largest = Math.max(largest, Math.hypot(real, imaginary));
  if (largest === 0) largest = deadTime > 0 ? 1 / deadTime : 1;
  const low = nearestTo(features, 0, AT_ZERO * largest, largest) / BEYOND;
  const flat = flatten(features);
  if (deadTime === 0) return march(low, largest * BEYOND, (frequency) => nearest(flat, 0, frequency));
  const high = Math.max(largest * BEYOND, (8 * Math.PI) / deadTime);
  return march(Math.min(low, 1 / (deadTime * BEYOND)), high, (frequency) =>
    Math.min(nearest(flat, 0, frequency), 1 / deadTime),
  );
}

function march(low: number, high: number, scaleAt: (x: number) => number): number[] {
  const points: number[] = [];
  for (let x = low; x < high; x += STEP * Math.max(Math.min(scaleAt(x), x), FINEST * x)) {
    points.push(x);
    if (points.length > MOST_POINTS) {
      throw new NumericFailure(
        `a frequency grid from ${low} to ${high} would need more than ${MOST_POINTS} points: the dead time is too long for the fastest pole`,
      );
    }
  }
  points.push(high);
  return points;
}

/** Distance from a real point to the nearest feature that is farther away than `least`, `most` at the most. */
function nearestTo(features: readonly Complex[], point: number, least: number, most: number): number {
  let result = most;
  for (const { real, imaginary } of features) {
    const distance = Math.hypot(real - point, imaginary);
    if (distance > least && distance < result) result = distance;
  }
  return result;
}

/** The features of the upper half plane; their mirror images are never nearer. */
function flatten(features: readonly Complex[]): Float64Array {
  return Float64Array.from(features.filter((z) => z.imaginary >= 0).flatMap((z) => [z.real, z.imaginary]));
}

function nearest(flat: Float64Array, real: number, imaginary: number): number {
  let least = Number.POSITIVE_INFINITY;
  for (let i = 0; i < flat.length; i += 2) {
    const x = flat[i] - real;
    const y = flat[i + 1] - imaginary;
    const square = x * x + y * y;
    if (square < least) least = square;
  }
  return Math.sqrt(least);
}
