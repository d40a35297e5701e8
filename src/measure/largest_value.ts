import { largest } from './extremes.js';
import { signalKey, windowKeys } from './keys.js';
import { measured, type TraceMeasure } from './measure.js';

/** The largest value of a signal in a window. */
export const largestValue: TraceMeasure = {
  description: {
    name: 'largest_value',
    basis: 'trace',
    keys: [signalKey, ...windowKeys],
    dimension: (of) => of,
    ratio: false,
    better: 'lower',
    window: 'from_first_event',
    meaning: 'max of `of` in the window; in the unit of `of`',
  },
  measure: ({ of, window }) => measured(largest(of, window.from, window.until).value),
};
