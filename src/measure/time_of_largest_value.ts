import { timeDimension } from '../spec/dimension.js';
import { largest } from './extremes.js';
import { signalKey, windowKeys } from './keys.js';
import { measured, type TraceMeasure, unformed } from './measure.js';

/** When a signal first has its largest value in a window, counted from the window's beginning. */
export const timeOfLargestValue: TraceMeasure = {
  description: {
    name: 'time_of_largest_value',
    basis: 'trace',
    keys: [signalKey, ...windowKeys],
    dimension: () => timeDimension,
    ratio: false,
    better: 'lower',
    least: 0,
    window: 'from_first_event',
    meaning: 'from the beginning of the window to the first time `of` has its largest value in it; s',
  },
  measure: ({ of, window }) => {
    const { value, time } = largest(of, window.from, window.until);
    return Number.isNaN(value) ? unformed('the signal is not a number') : measured(time - window.from);
  },
};
