import { smallest } from './extremes.js';
import { signalKey, windowKeys } from './keys.js';
import { measured, type TraceMeasure } from './measure.js';

/** The smallest value of a signal in a window. */
export const smallestValue: TraceMeasure = {
  description: {
    name: 'smallest_value',
    basis: 'trace',
    keys: [signalKey, ...windowKeys],
    dimension: (of) => of,
    ratio: false,
    better: 'higher',
    window: 'from_first_event',
    meaning: 'min of `of` in the window; in the unit of `of`',
  },
  measure: ({ of, window }) => measured(smallest(of, window.from, window.until).value),
};
