import { countOf } from '../loop/counters.js';
import { plainNumber } from '../spec/dimension.js';
import { largest } from './extremes.js';
import { measured, type TraceMeasure } from './measure.js';

/** How often a controller has values that a range holds at one of its ends, or inputs that their number format does, over the whole scenario. */
export const limitHitCount: TraceMeasure = {
  description: {
    name: 'limit_hit_count',
    basis: 'trace',
    keys: [
      {
        name: 'of',
        kind: 'controller',
        signal: (controller) => countOf('limit hits', controller),
        optional: false,
        meaning: 'a controller',
      },
    ],
    dimension: () => plainNumber,
    ratio: false,
    better: 'lower',
    window: undefined,
    meaning:
      'number of values that a range holds at one of its ends, or inputs that their number format does, in the controller over the whole scenario; a plain number',
  },
  measure: ({ of }) => measured(largest(of, of.times[0], of.times[of.pieces]).value),
};
