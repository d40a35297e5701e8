import { plainNumber, timeDimension } from '../spec/dimension.js';
import { signalKey, windowKeys } from './keys.js';
import { measured, type TraceMeasure, unformed } from './measure.js';
import { largestMeanOfSize } from './sliding_mean.js';

/** The largest mean effort over any stretch of a given length, as a share of full effort: what heats an actuator. */
export const duty: TraceMeasure = {
  description: {
    name: 'duty',
    basis: 'trace',
    keys: [
      { ...signalKey, meaning: 'a signal with a range' },
      {
        name: 'over',
        kind: 'quantity',
        dimension: () => timeDimension,
        optional: false,
        meaning: 'length of the stretch that slides over the window',
      },
      ...windowKeys,
    ],
    dimension: () => plainNumber,
    ratio: false,
    better: 'lower',
    least: 0,
    most: 1,
    window: 'from_first_event',
    meaning:
      'largest mean of |of| over any stretch of length `over` inside the window, divided by the larger end of its range in size; a share',
  },
  measure: ({ of, range, window, quantity }) => {
    if (!range) return unformed('the signal has no range');
    const over = quantity('over')!;
    if (over > window.until - window.from) return unformed(`\`over\` (${over} s) is longer than the window`);
    const full = Math.max(Math.abs(range.low), Math.abs(range.high));
    return measured(largestMeanOfSize(of, over, window) / full);
  },
};
