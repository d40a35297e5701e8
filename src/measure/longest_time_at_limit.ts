import { timeDimension } from '../spec/dimension.js';
import { scaled } from './curve.js';
import { signalKey, windowKeys } from './keys.js';
import { measured, type TraceMeasure, unformed } from './measure.js';
import { longestTimeAtOrAbove } from './time_at_or_above.js';

/** The longest time without a break that a signal stays at one end of its range. */
export const longestTimeAtLimit: TraceMeasure = {
  description: {
    name: 'longest_time_at_limit',
    basis: 'trace',
    keys: [{ ...signalKey, meaning: 'a signal with a range' }, ...windowKeys],
    dimension: () => timeDimension,
    ratio: false,
    better: 'lower',
    least: 0,
    window: 'from_first_event',
    meaning:
      'longest time without a break in which `of` is within half a resolution of one end of its range, in the window; s',
  },
  measure: ({ of, range, window: { from, until } }) => {
    if (!range) return unformed('the signal has no range');
    const margin = range.resolution / 2;
    return measured(
      Math.max(
        longestTimeAtOrAbove(of, range.high - margin, from, until),
        longestTimeAtOrAbove(scaled(of, -1), margin - range.low, from, until),
      ),
    );
  },
};
