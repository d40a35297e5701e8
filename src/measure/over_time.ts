import { plainNumber } from '../spec/dimension.js';
import { measured, type TraceMeasure, unformed } from './measure.js';
import { marginAtStart } from './statement_margin.js';

/** By how much a statement over time holds, in units of the scales of its comparisons; negative where it does not. */
export const overTime: TraceMeasure = {
  description: {
    name: 'over_time',
    basis: 'trace',
    keys: [
      {
        name: 'holds',
        kind: 'statement',
        optional: false,
        meaning:
          'a statement: a comparison of signals, or a mapping with throughout, at_some_time, holds_up_to, when, all_of or one_of',
      },
    ],
    dimension: () => plainNumber,
    ratio: false,
    better: 'higher',
    window: undefined,
    meaning:
      'by how much the statement `holds` is true at the start of the scenario: distance of each comparison from equality over its scale, the smallest for all_of and throughout, the largest for one_of and at_some_time; a plain number, negative where it is not true',
  },
  measure: ({ statement, signal, parameter }) => {
    if (!statement) return unformed('there is no statement');
    return measured(marginAtStart(statement, { signal, parameter }));
  },
};
