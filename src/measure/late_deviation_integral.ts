import { powerOf, productOf, timeDimension } from '../spec/dimension.js';
import { difference } from './curve_arithmetic.js';
import { timeWeightedIntegral } from './integrals.js';
import { responseKey, targetKey, windowKeys } from './keys.js';
import { measured, type TraceMeasure, unformed } from './measure.js';

/** The integral of the size of the tracking error, weighted by time, so that late errors count more. */
export const lateDeviationIntegral: TraceMeasure = {
  description: {
    name: 'late_deviation_integral',
    basis: 'trace',
    keys: [responseKey, targetKey, ...windowKeys],
    dimension: (of) => productOf(of, powerOf(timeDimension, 2)),
    ratio: false,
    better: 'lower',
    least: 0,
    window: 'from_first_event',
    meaning:
      '∫ t·|of − to| dt over the window, t from its beginning, so that late errors count more; in the unit of `of` times s²',
  },
  measure: ({ of, to, window }) => {
    if (!to) return unformed('there is no target');
    return measured(timeWeightedIntegral(difference(of, to), window));
  },
};
