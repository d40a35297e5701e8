import { timeDimension } from '../spec/dimension.js';
import { smallest } from './extremes.js';
import { signalKey, windowKeys } from './keys.js';
import { measured, type TraceMeasure, unformed } from './measure.js';

/** When a signal first has its smallest value in a window, counted from the window's beginning. */
export const timeOfSmallestValue: TraceMeasure = {
  description: {
    name: 'time_of_smallest_value',
    basis: 'trace',
    keys: [signalKey, ...windowKeys],
    dimension: () => timeDimension,
    ratio: false,
    better: 'lower',
    least: 0,
    window: 'from_first_event',
    meaning: 'from the beginning of the window to the first time `of` has its smallest value in it; s',
  },
  measure: ({ of, window }) => {
    const { value, time } = smallest(of, window.from, window.until);
    return Number.isNaN(value) ? unformed('the signal is not a number') : measured(time - window.from);
  },
};
