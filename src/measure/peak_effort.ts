import { largestSize } from './extremes.js';
import { signalKey, windowKeys } from './keys.js';
import { measured, type TraceMeasure } from './measure.js';

/** The largest size of an actuator's value in a window. */
export const peakEffort: TraceMeasure = {
  description: {
    name: 'peak_effort',
    basis: 'trace',
    keys: [signalKey, ...windowKeys],
    dimension: (of) => of,
    ratio: false,
    better: 'lower',
    least: 0,
    window: 'from_first_event',
    meaning: 'max |of| in the window; in the unit of `of`',
  },
  measure: ({ of, window }) => measured(largestSize(of, window.from, window.until)),
};
