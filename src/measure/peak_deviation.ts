import { difference, largest, smallest } from './extremes.js';
import { measured, type TraceMeasure, unformed } from './measure.js';

/** The largest distance of the response from the target from the scenario's first event on: max |of − to|. */
export const peakDeviation: TraceMeasure = {
  description: {
    name: 'peak_deviation',
    basis: 'trace',
    keys: [
      { name: 'of', kind: 'signal', optional: false, meaning: 'the response' },
      { name: 'to', kind: 'target', optional: false, meaning: 'what it should follow' },
    ],
    dimension: (of) => of,
    ratio: false,
    better: 'lower',
    window: 'from_first_event',
    meaning: 'max |of − to| from the first event of the scenario to its end; in the unit of `of`',
  },
  measure: ({ of, to, firstEvent }) => {
    if (!to) return unformed('there is no target');
    const gap = difference(of, to);
    const end = gap.times[gap.pieces];
    return measured(Math.max(largest(gap, firstEvent, end).value, -smallest(gap, firstEvent, end).value));
  },
};
