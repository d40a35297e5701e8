import { LOOP_GAIN } from '../linear/band_extremes.js';
import { plainNumber } from '../spec/dimension.js';
import { extremeOverRange } from './frequency_range.js';
import { frequencyRangeKeys, loopPointKey } from './keys.js';
import type { LoopMeasure } from './measure.js';
import { ofSingleRate } from './stable_loop.js';

/** The largest loop gain over a range of frequencies, as roll-off asks for. */
export const largestLoopGain: LoopMeasure = {
  description: {
    name: 'largest_loop_gain',
    basis: 'loop',
    keys: [loopPointKey, ...frequencyRangeKeys],
    dimension: () => plainNumber,
    ratio: true,
    better: 'lower',
    least: 0,
    window: undefined,
    meaning: 'max |L| from `from_frequency` to `to_frequency`, or at `frequency`; a ratio or dB',
  },
  measure: ({ loop, quantity }) =>
    ofSingleRate(loop, () => extremeOverRange(loop, LOOP_GAIN, 'largest', quantity)),
};
