import { plainNumber } from '../spec/dimension.js';
import { scaled } from './extremes.js';
import { measured, type TraceMeasure, unformed } from './measure.js';
import { timeAtOrAbove } from './time_at_or_above.js';

/**
 * The share of time, from the scenario's first event to its end, in which the signal is within half a resolution of
 * either end of its own range.
 */
export const saturatedShare: TraceMeasure = {
  description: {
    name: 'saturated_share',
    basis: 'trace',
    keys: [{ name: 'of', kind: 'signal', optional: false, meaning: 'a signal with a range' }],
    dimension: () => plainNumber,
    ratio: false,
    better: 'lower',
    window: 'from_first_event',
    meaning:
      'time with `of` within half a resolution of either end of its range / time from the first event to the end; a share',
  },
  measure: ({ of, range, firstEvent }) => {
    if (!range) return unformed('the signal has no range');
    const end = of.times[of.pieces];
    const margin = range.resolution / 2;
    const high = timeAtOrAbove(of, range.high - margin, firstEvent, end);
    const low = timeAtOrAbove(scaled(of, -1), -(range.low + margin), firstEvent, end);
    return measured((high + low) / (end - firstEvent));
  },
};
