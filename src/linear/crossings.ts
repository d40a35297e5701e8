import type { FrequencySweep } from './frequency_sweep.js';
import { zerosOver } from './sweep_zeros.js';

/** A frequency at which the loop gain is one. */
export interface GainCrossing {
  /** rad/s */
  frequency: number;
  /** Angle of L above −180° there, in rad, in (−π, π]: by so much the phase may fall (or, when negative, rise). */
  phaseMargin: number;
}

/** A frequency at which L is real and negative. */
export interface PhaseCrossing {
  /** rad/s; 0, half the sampling frequency and Infinity may be among them. */
  frequency: number;
  /** The gain factor 1/|L| which puts a closed-loop pole there. */
  factor: number;
}

/**
 * Where |L| or 1/|L| is beyond this (120 dB), rounding can turn the sign of L (at an integrator it always does), and nothing
 * is counted as a crossing.
 */
const LARGEST_GAIN = 1e6;

/**
 * All frequencies inside the swept range at which |L| is one, ascending. They are changes of sign on a grid that follows
 * the poles and zeros, found to double precision; pairs that lie between two grid points are sought at near misses.
 */
export function gainCrossings(sweep: FrequencySweep): GainCrossing[] {
  const parts = new Float64Array(4);
  return zerosOver(sweep, gainExcess, 0, sweep.frequencies.length - 1).map((frequency) => {
    sweep.transfer.evaluate(frequency, parts);
    const [dr, di, nr, ni] = parts;
    // The angle of −L is the angle of L above −180°.
    return { frequency, phaseMargin: Math.atan2(-(ni * dr - nr * di), -(nr * dr + ni * di)) };
  });
}

/** All frequencies inside the swept range at which L is real and negative, ascending; found as `gainCrossings` are. */
export function phaseCrossings(sweep: FrequencySweep): PhaseCrossing[] {
  const parts = new Float64Array(4);
  const result: PhaseCrossing[] = [];
  for (const frequency of zerosOver(sweep, quadrature, 1, sweep.lastInner)) {
    sweep.transfer.evaluate(frequency, parts);
    const crossing = phaseCrossingAt(frequency, parts);
    if (crossing) result.push(crossing);
  }
  return result;
}

/**
 * The phase crossing at a frequency where L is known to be real, or undefined where it is positive or beyond counting.
 * @param parts denominator and numerator of L: real, imaginary, real, imaginary.
 */
export function phaseCrossingAt(frequency: number, parts: Float64Array): PhaseCrossing | undefined {
  const [dr, di, nr, ni] = parts;
  const factor = Math.hypot(dr, di) / Math.hypot(nr, ni);
  const negative = nr * dr + ni * di < 0;
  return negative && factor < LARGEST_GAIN && factor > 1 / LARGEST_GAIN ? { frequency, factor } : undefined;
}

/** (|L|² − 1)/(|L|² + 1). */
function gainExcess(p: Float64Array, at: number): number {
  const below = p[at] * p[at] + p[at + 1] * p[at + 1];
  const above = p[at + 2] * p[at + 2] + p[at + 3] * p[at + 3];
  return above + below === 0 ? 0 : (above - below) / (above + below);
}

/** The sine of L's angle. */
function quadrature(p: Float64Array, at: number): number {
  const below = p[at] * p[at] + p[at + 1] * p[at + 1];
  const above = p[at + 2] * p[at + 2] + p[at + 3] * p[at + 3];
  const product = Math.sqrt(below) * Math.sqrt(above);
  return product === 0 ? 0 : (p[at + 3] * p[at] - p[at + 2] * p[at + 1]) / product;
}
