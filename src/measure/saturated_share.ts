import { plainNumber } from '../spec/dimension.js';
import { scaled } from './curve.js';
import { smallest } from './extremes.js';
import { signalKey, windowKeys } from './keys.js';
import { measured, type TraceMeasure, unformed } from './measure.js';
import { timeAtOrAbove } from './time_at_or_above.js';

/** The share of a window in which the signal is within half a resolution of either end of its own range. */
export const saturatedShare: TraceMeasure = {
  description: {
    name: 'saturated_share',
    basis: 'trace',
    keys: [{ ...signalKey, meaning: 'a signal with a range' }, ...windowKeys],
    dimension: () => plainNumber,
    ratio: false,
    better: 'lower',
    least: 0,
    most: 1,
    window: 'from_first_event',
    meaning:
      'time with `of` within half a resolution of either end of its range, over the length of the window; a share',
  },
  measure: ({ of, range, window: { from, until } }) => {
    if (!range) return unformed('the signal has no range');
    const margin = range.resolution / 2;
    const high = timeAtOrAbove(of, range.high - margin, from, until);
    const low = range.low + margin;
    // Most signals never reach their low end: then no curve needs to be turned over.
    const isFree = smallest(of, from, until).value > low;
    const atLow = isFree ? 0 : timeAtOrAbove(scaled(of, -1), -low, from, until);
    return measured((high + atLow) / (until - from));
  },
};
