import { productOf, timeDimension } from '../spec/dimension.js';
import { difference } from './curve_arithmetic.js';
import { squareIntegral } from './integrals.js';
import { responseKey, targetKey, windowKeys } from './keys.js';
import { measured, type TraceMeasure, unformed } from './measure.js';

/** The integral of the squared tracking error. */
export const squaredDeviationIntegral: TraceMeasure = {
  description: {
    name: 'squared_deviation_integral',
    basis: 'trace',
    keys: [responseKey, targetKey, ...windowKeys],
    dimension: (of) => productOf(productOf(of, of), timeDimension),
    ratio: false,
    better: 'lower',
    least: 0,
    window: 'from_first_event',
    meaning: '∫ (of − to)² dt over the window; in the squared unit of `of` times s',
  },
  measure: ({ of, to, window }) => {
    if (!to) return unformed('there is no target');
    return measured(squareIntegral(difference(of, to), window));
  },
};
