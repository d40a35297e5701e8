import { SENSITIVITY } from '../linear/loop_peaks.js';
import { plainNumber } from '../spec/dimension.js';
import { extremeOverRange } from './frequency_range.js';
import { frequencyRangeKeys, loopPointKey } from './keys.js';
import type { LoopMeasure } from './measure.js';
import { ofSingleRate, ofStableLoop } from './stable_loop.js';

/** The largest gain of disturbances over a range of frequencies. */
export const largestSensitivity: LoopMeasure = {
  description: {
    name: 'largest_sensitivity',
    basis: 'loop',
    keys: [loopPointKey, ...frequencyRangeKeys],
    dimension: () => plainNumber,
    ratio: true,
    better: 'lower',
    least: 0,
    window: undefined,
    meaning:
      'max |1/(1 + L)| from `from_frequency` to `to_frequency`, or at `frequency`; a ratio or dB; infinite when the closed loop is unstable',
  },
  measure: ({ loop, quantity }) =>
    ofStableLoop(loop, Number.POSITIVE_INFINITY, () =>
      ofSingleRate(loop, () => extremeOverRange(loop, SENSITIVITY, 'largest', quantity)),
    ),
};
