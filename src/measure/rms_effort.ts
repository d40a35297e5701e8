import { rootMeanSquare } from './integrals.js';
import { signalKey, windowKeys } from './keys.js';
import { measured, type TraceMeasure } from './measure.js';

/** The root of the mean square of an actuator's value in a window. */
export const rmsEffort: TraceMeasure = {
  description: {
    name: 'rms_effort',
    basis: 'trace',
    keys: [signalKey, ...windowKeys],
    dimension: (of) => of,
    ratio: false,
    better: 'lower',
    least: 0,
    window: 'from_first_event',
    meaning: '√(∫ of² dt / length) over the window; in the unit of `of`',
  },
  measure: ({ of, window }) => measured(rootMeanSquare(of, window)),
};
