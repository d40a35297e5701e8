import { largest, smallest } from './extremes.js';
import { signalKey, windowKeys } from './keys.js';
import { measured, type TraceMeasure } from './measure.js';

/** Half the distance between the largest and the smallest value in a window. */
export const oscillationAmplitude: TraceMeasure = {
  description: {
    name: 'oscillation_amplitude',
    basis: 'trace',
    keys: [signalKey, ...windowKeys],
    dimension: (of) => of,
    ratio: false,
    better: 'lower',
    least: 0,
    window: 'from_first_event',
    meaning: '(max of − min of)/2 in the window; in the unit of `of`',
  },
  measure: ({ of, window: { from, until } }) =>
    measured((largest(of, from, until).value - smallest(of, from, until).value) / 2),
};
