import { difference } from './curve_arithmetic.js';
import { rootMeanSquare } from './integrals.js';
import { responseKey, targetKey, windowKeys } from './keys.js';
import { measured, type TraceMeasure, unformed } from './measure.js';

/** The root of the mean square of the tracking error. */
export const rmsDeviation: TraceMeasure = {
  description: {
    name: 'rms_deviation',
    basis: 'trace',
    keys: [responseKey, targetKey, ...windowKeys],
    dimension: (of) => of,
    ratio: false,
    better: 'lower',
    least: 0,
    window: 'from_first_event',
    meaning:
      '√(∫ (of − to)² dt / length) over the window: the root mean square of the tracking error; in the unit of `of`',
  },
  measure: ({ of, to, window }) => {
    if (!to) return unformed('there is no target');
    return measured(rootMeanSquare(difference(of, to), window));
  },
};
