import { sensitivityOf } from './closed_loop.js';
import type { Complex } from './complex.js';
import { gainCrossings } from './crossings.js';
import { staysStableWithDeadTime } from './dead_time_stability.js';
import { type FrequencySweep, sweepOf } from './frequency_sweep.js';
import { areStable, polesOf } from './poles.js';
import type { StateEquations } from './state_equations.js';
import { transmissionZeros } from './transmission_zeros.js';

/** What all margins of one loop start from. */
export interface LoopAnalysis {
  /** Whether all closed-loop poles lie inside the boundary of stability. */
  stable: boolean;
  /** L over the whole range of frequencies. */
  sweep: FrequencySweep;
  /** What L tends to at infinite frequency, at its worst angle when there is a dead time; undefined for a sampled loop. */
  atInfinity: number | undefined;
  /** 1/(1 + L), for proofs about its peaks; undefined with a dead time or for an unstable loop. */
  sensitivity: StateEquations | undefined;
}

/**
 * Stability and the swept response of a loop transfer L with one input and one output.
 * @param deadTime pure delay in s that multiplies a continuous L by e^{−jω·deadTime}.
 * @throws RangeError for several inputs or outputs or a dead time in a sampled loop, NumericFailure when the loop cannot be
 * closed or an entry is not finite.
 */
export function analyseLoop(loop: StateEquations, deadTime: number): LoopAnalysis {
  const { period } = loop;
  if (deadTime !== 0 && !(deadTime > 0 && period === undefined)) {
    throw new RangeError(
      `a dead time of ${deadTime} s was given: it must be positive, and the loop continuous`,
    );
  }
  const sensitivity = sensitivityOf(loop);
  const closed = polesOf(sensitivity.a, period);
  const features = featuresOf(loop, closed);
  const feedthrough = loop.d.data[0];
  if (deadTime > 0) {
    const undelayed = sweepOf(loop, features);
    const unstablePoles = closed.filter(({ real }) => real >= 0).length;
    return {
      stable: staysStableWithDeadTime(
        undelayed,
        gainCrossings(undelayed),
        unstablePoles,
        feedthrough,
        deadTime,
      ),
      sweep: sweepOf(loop, features, deadTime),
      atInfinity: -Math.abs(feedthrough),
      sensitivity: undefined,
    };
  }
  const stable = areStable(closed, period);
  return {
    stable,
    sweep: sweepOf(loop, features),
    atInfinity: period === undefined ? feedthrough : undefined,
    sensitivity: stable ? sensitivity : undefined,
  };
}

/** Poles and zeros of the loop transfer, and its closed-loop poles. */
function featuresOf(loop: StateEquations, closed: readonly Complex[]): Complex[] {
  const poles = [...closed, ...polesOf(loop.a, loop.period)];
  const largest = Math.max(0, ...poles.map(({ real, imaginary }) => Math.hypot(real, imaginary)));
  return [...poles, ...transmissionZeros(loop, largest > 0 ? largest : 1)];
}
