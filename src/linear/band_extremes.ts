import { sensitivityOf } from './closed_loop.js';
import { sweepOf } from './frequency_sweep.js';
import type { ClosedLoopRatio } from './loop_peaks.js';
import type { Peak } from './peak.js';
import { polesOf } from './poles.js';
import { expectSingle } from './response.js';
import { rootBetween } from './root_finding.js';
import type { StateEquations } from './state_equations.js';
import { transmissionZeros } from './transmission_zeros.js';

/** A response of a loop: `open` without closing it, as a polynomial in L alone. */
export type LoopResponse = ClosedLoopRatio & { open?: boolean };

/** The loop transfer L itself. */
export const LOOP_GAIN: LoopResponse = { loopWeight: 1, unitWeight: 0, open: true };

/** The largest and the smallest size of a response over a band. */
export interface BandExtremes {
  largest: Peak;
  smallest: Peak;
}

/**
 * The extremes of a response of a loop transfer L over a band of frequencies, its ends included. Between them they are
 * zeros of the exact slope, sought between the points of a grid that is short near every pole and zero of L and of the
 * closed loop.
 * @param response `LOOP_GAIN`, or a closed-loop response.
 * @param low rad/s
 * @param high rad/s, up to half the sampling frequency.
 * @throws RangeError for several inputs or outputs, NumericFailure when the loop cannot be closed.
 */
export function extremesOverBand(
  loop: StateEquations,
  response: LoopResponse,
  low: number,
  high: number,
): BandExtremes {
  expectSingle(loop);
  const poles = polesOf(loop.a, loop.period);
  const typical = Math.max(0, ...poles.map(({ real, imaginary }) => Math.hypot(real, imaginary))) || 1;
  const features = [
    ...poles,
    ...polesOf(sensitivityOf(loop).a, loop.period),
    ...transmissionZeros(loop, typical),
  ];
  const { transfer, frequencies } = sweepOf(loop, features);
  const parts = new Float64Array(8);
  const sizeAt = (frequency: number): Peak => {
    transfer.evaluate(frequency, parts);
    return { value: sizeOf(parts, response), frequency };
  };
  const slopeAt = (frequency: number): number => {
    transfer.evaluateWithSlope(frequency, parts);
    return slopeOf(parts, response);
  };
  const inside = frequencies.filter((frequency) => frequency > low && frequency < high);
  const grid = [low, ...inside, ...(high > low ? [high] : [])];
  const slopes = grid.map(slopeAt);
  const turns = grid.slice(1).flatMap((to, i) => {
    if (!(slopes[i] * slopes[i + 1] < 0)) return [];
    return [rootBetween(slopeAt, grid[i], to)];
  });
  const peaks = [...grid, ...turns].map(sizeAt);
  return {
    largest: peaks.reduce((best, peak) => (peak.value > best.value ? peak : best)),
    smallest: peaks.reduce((best, peak) => (peak.value < best.value ? peak : best)),
  };
}

function sizeOf(p: Float64Array, { loopWeight, unitWeight, open }: LoopResponse): number {
  const top = Math.hypot(loopWeight * p[2] + unitWeight * p[0], loopWeight * p[3] + unitWeight * p[1]);
  return top / (open ? Math.hypot(p[0], p[1]) : Math.hypot(p[0] + p[2], p[1] + p[3]));
}

/**
 * A number with the sign of the slope of the size, Re(top′/top − bottom′/bottom), multiplied by the squares of both: it has
 * no pole where the response is zero.
 */
function slopeOf(p: Float64Array, { loopWeight, unitWeight, open }: LoopResponse): number {
  const top = (at: number): number => loopWeight * p[at + 2] + unitWeight * p[at];
  const bottom = (at: number): number => (open ? p[at] : p[at] + p[at + 2]);
  return turn(top) * square(bottom) - turn(bottom) * square(top);
}

/** Re(z̄·z′), from a number's parts at 0 and 1 and its slope's at 4 and 5. */
function turn(part: (at: number) => number): number {
  return part(0) * part(4) + part(1) * part(5);
}

function square(part: (at: number) => number): number {
  return part(0) * part(0) + part(1) * part(1);
}
