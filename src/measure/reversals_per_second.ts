import { rateDimension } from '../spec/dimension.js';
import { signalKey, windowKeys } from './keys.js';
import { measured, type TraceMeasure } from './measure.js';
import { turningPoints } from './turning_points.js';

/** How often a signal changes its direction. */
export const reversalsPerSecond: TraceMeasure = {
  description: {
    name: 'reversals_per_second',
    basis: 'trace',
    keys: [
      signalKey,
      {
        name: 'beyond',
        kind: 'quantity',
        dimension: (of) => of,
        optional: true,
        meaning: 'a change of direction counts when the signal then moves by more than this; 0 unless given',
      },
      ...windowKeys,
    ],
    dimension: () => rateDimension,
    ratio: false,
    better: 'lower',
    least: 0,
    window: 'from_first_event',
    meaning:
      'number of changes of direction of `of` after which it moves by more than `beyond`, over the length of the window; 1/s',
  },
  measure: ({ of, window, quantity }) =>
    measured(turningPoints(of, window, quantity('beyond') ?? 0).length / (window.until - window.from)),
};
