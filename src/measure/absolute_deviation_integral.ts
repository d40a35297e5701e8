import { productOf, timeDimension } from '../spec/dimension.js';
import { difference } from './curve_arithmetic.js';
import { absoluteIntegral } from './integrals.js';
import { responseKey, targetKey, windowKeys } from './keys.js';
import { measured, type TraceMeasure, unformed } from './measure.js';

/** The integral of the size of the tracking error. */
export const absoluteDeviationIntegral: TraceMeasure = {
  description: {
    name: 'absolute_deviation_integral',
    basis: 'trace',
    keys: [responseKey, targetKey, ...windowKeys],
    dimension: (of) => productOf(of, timeDimension),
    ratio: false,
    better: 'lower',
    least: 0,
    window: 'from_first_event',
    meaning: '∫ |of − to| dt over the window; in the unit of `of` times s',
  },
  measure: ({ of, to, window }) => {
    if (!to) return unformed('there is no target');
    return measured(absoluteIntegral(difference(of, to), window));
  },
};
