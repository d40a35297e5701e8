import { timeDimension } from '../spec/dimension.js';
import { loopPointsKey } from './keys.js';
import type { LoopView } from './loop_view.js';
import { type LoopMeasure, type MeasureResult, measured, unformed } from './measure.js';
import { ofStableLoop } from './stable_loop.js';

/** The delay (s) that brings the loop to the edge of stability. */
export const delayMargin: LoopMeasure = {
  description: {
    name: 'delay_margin',
    basis: 'loop',
    keys: [loopPointsKey],
    dimension: () => timeDimension,
    ratio: false,
    better: 'higher',
    least: 0,
    window: undefined,
    meaning:
      'smallest delay τ that brings the loop to the edge of stability: the smallest (π + arg L)/ω, counted from 0 to 2π, over all frequencies with |L| = 1, and where |L| ≥ 1 at half the sampling frequency π/T the τ with L·cos(πτ/T) = −1 there (of several rates: the smallest τ for which e^{−jωτ} on each frequency of the cycle gives the lifted L the eigenvalue −1) (of several signals, which must change equally often: the same τ on all at once, L being an eigenvalue of the matrix L); s; infinite without a crossover, 0 when the closed loop is unstable',
  },
  measure: ({ loop }) => ofStableLoop(loop, 0, () => delayMarginOf(loop)),
};

function delayMarginOf(loop: LoopView): MeasureResult {
  const [first, ...others] = loop.periods;
  const other = others.find((period) => period !== first);
  if (other === undefined) return measured(loop.delayMargin());
  return unformed(
    `the opened signals change at different rates, every ${first} s and every ${other} s, so that one delay turns them differently; open the loop at signals of one rate, or at one of them`,
  );
}
