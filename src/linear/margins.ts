import {
  type GainCrossing,
  gainCrossings,
  type PhaseCrossing,
  phaseCrossingAt,
  phaseCrossings,
} from './crossings.js';
import type { FrequencySweep } from './frequency_sweep.js';
import { analyseLoop } from './loop_analysis.js';
import { peakOfLoop } from './loop_peaks.js';
import { COMPLEMENTARY, SENSITIVITY } from './loop_response.js';
import type { Peak } from './peak.js';
import type { StateEquations } from './state_equations.js';

/**
 * How far a loop is from instability. All are as the loop stands, counted from −1; an unstable loop has none, so every
 * margin is zero then. No crossing means an infinite margin.
 */
export interface LoopMargins {
  /** Whether all closed-loop poles lie inside the boundary of stability. */
  stable: boolean;
  gainMargin: GainMargin;
  /** Smallest size of the phase margin over all gain crossings, in rad. */
  phaseMargin: number;
  /**
   * Smallest delay in s that brings a gain crossing to −1, over all of them. Where a sampled |L| is one or more still at half
   * the sampling frequency, also the delay that brings L to −1 there: a sine and its own image are turned both ways, which
   * leaves the cosine of the turn.
   */
  delayMargin: number;
  /** Least distance of L from −1, which is one over the sensitivity peak. */
  modulusMargin: number;
  /** Largest |1/(1 + L)|. */
  sensitivityPeak: Peak;
  /** Largest |L/(1 + L)|. */
  complementaryPeak: Peak;
  /** All frequencies with |L| = 1, ascending, also for an unstable loop. */
  gainCrossings: GainCrossing[];
  /** All frequencies with L real and negative, ascending, also for an unstable loop. */
  phaseCrossings: PhaseCrossing[];
}

/** By which factors the gain of a loop may change. */
export interface GainMargin {
  /** Smallest factor above one that brings a closed-loop pole to the boundary; Infinity when there is none. */
  up: number;
  /** Largest factor below one that does; 0 when there is none. */
  down: number;
  /** The nearer of the two as a factor above one: the smaller of `up` and 1/`down`. */
  ratio: number;
}

/**
 * The margins of a loop transfer L, sampled or continuous, with the sign such that stability is about 1 + L.
 * For a sampled loop frequencies go up to half the sampling frequency, both ends included.
 * @param deadTime pure delay in s that multiplies a continuous L by e^{−jω·deadTime}.
 * @throws RangeError for several inputs or outputs or a dead time in a sampled loop, NumericFailure when the loop cannot be
 * closed or an entry is not finite.
 */
export function marginsOfLoop(loop: StateEquations, deadTime = 0): LoopMargins {
  const analysis = analyseLoop(loop, deadTime);
  const { sweep, stable, atInfinity } = analysis;
  const crossings = {
    gainCrossings: gainCrossings(sweep),
    phaseCrossings: allPhaseCrossings(sweep, atInfinity),
  };
  if (!stable) return { ...UNSTABLE, ...crossings };
  const sensitivityPeak = peakOfLoop(analysis, SENSITIVITY);
  return {
    stable,
    gainMargin: gainMarginOf(crossings.phaseCrossings),
    phaseMargin: smallest(crossings.gainCrossings, ({ phaseMargin }) => Math.abs(phaseMargin)),
    delayMargin: Math.min(
      smallest(crossings.gainCrossings, delayMarginAt),
      delayAtHighestFrequency(sweep, loop.period),
    ),
    modulusMargin: 1 / sensitivityPeak.value,
    sensitivityPeak,
    complementaryPeak: peakOfLoop(analysis, COMPLEMENTARY),
    ...crossings,
  };
}

const UNSTABLE = {
  stable: false,
  gainMargin: { up: 1, down: 1, ratio: 1 },
  phaseMargin: 0,
  delayMargin: 0,
  modulusMargin: 0,
  sensitivityPeak: { value: Number.POSITIVE_INFINITY, frequency: undefined },
  complementaryPeak: { value: Number.POSITIVE_INFINITY, frequency: undefined },
};

/** Those inside the range, and the ends, where L is always real. */
function allPhaseCrossings(sweep: FrequencySweep, atInfinity: number | undefined): PhaseCrossing[] {
  const result = phaseCrossings(sweep);
  const start = phaseCrossingAt(0, sweep.parts.subarray(0, 4));
  if (start) result.unshift(start);
  const last = sweep.frequencies.length - 1;
  const end =
    atInfinity === undefined
      ? phaseCrossingAt(sweep.frequencies[last], sweep.parts.subarray(4 * last, 4 * last + 4))
      : phaseCrossingAt(Number.POSITIVE_INFINITY, Float64Array.of(1, 0, atInfinity, 0));
  if (end) result.push(end);
  return result;
}

/** The nearest gain factors on either side of one, of all factors that bring a closed-loop pole to the boundary. */
export function gainMarginOf(crossings: readonly { factor: number }[]): GainMargin {
  let up = Number.POSITIVE_INFINITY;
  let down = 0;
  for (const { factor } of crossings) {
    if (factor >= 1) up = Math.min(up, factor);
    else down = Math.max(down, factor);
  }
  return { up, down, ratio: Math.min(up, 1 / down) };
}

function delayMarginAt({ frequency, phaseMargin }: GainCrossing): number {
  return (phaseMargin < 0 ? phaseMargin + 2 * Math.PI : phaseMargin) / frequency;
}

/** The τ with L·cos(πτ/T) = −1, L being real at half the sampling frequency π/T. */
function delayAtHighestFrequency({ parts }: FrequencySweep, period: number | undefined): number {
  if (period === undefined) return Number.POSITIVE_INFINITY;
  const [dr, di, nr, ni] = parts.subarray(parts.length - 4);
  const inverse = (dr * nr + di * ni) / (nr * nr + ni * ni);
  return Math.abs(inverse) <= 1 ? (period / Math.PI) * Math.acos(-inverse) : Number.POSITIVE_INFINITY;
}

function smallest<T>(items: readonly T[], of: (item: T) => number): number {
  return items.reduce((least, item) => Math.min(least, of(item)), Number.POSITIVE_INFINITY);
}
