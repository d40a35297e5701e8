import { countOf } from '../loop/counters.js';
import { plainNumber } from '../spec/dimension.js';
import { largest } from './extremes.js';
import { measured, type TraceMeasure } from './measure.js';

/** How often a controller has results that leave the number format before they saturate or wrap, sums in the accumulator included, over the whole scenario. */
export const overflowCount: TraceMeasure = {
  description: {
    name: 'overflow_count',
    basis: 'trace',
    keys: [
      {
        name: 'of',
        kind: 'controller',
        signal: (controller) => countOf('overflows', controller),
        optional: false,
        meaning: 'a controller',
      },
    ],
    dimension: () => plainNumber,
    ratio: false,
    better: 'lower',
    window: undefined,
    meaning:
      'number of results that leave the number format before they saturate or wrap, sums in the accumulator included, in the controller over the whole scenario; a plain number',
  },
  measure: ({ of }) => measured(largest(of, of.times[0], of.times[of.pieces]).value),
};
