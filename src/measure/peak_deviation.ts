import { difference } from './curve_arithmetic.js';
import { largestSize } from './extremes.js';
import { responseKey, targetKey, windowKeys } from './keys.js';
import { measured, type TraceMeasure, unformed } from './measure.js';

/** The largest distance of the response from the target, the largest tracking error: max |of − to|. */
export const peakDeviation: TraceMeasure = {
  description: {
    name: 'peak_deviation',
    basis: 'trace',
    keys: [responseKey, targetKey, ...windowKeys],
    dimension: (of) => of,
    ratio: false,
    better: 'lower',
    least: 0,
    window: 'from_first_event',
    meaning: 'max |of − to| in the window: the largest tracking error; in the unit of `of`',
  },
  measure: ({ of, to, window }) => {
    if (!to) return unformed('there is no target');
    return measured(largestSize(difference(of, to), window.from, window.until));
  },
};
