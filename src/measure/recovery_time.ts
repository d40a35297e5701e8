import { timeDimension } from '../spec/dimension.js';
import { difference } from './curve_arithmetic.js';
import { responseKey, targetKey, windowKeys } from './keys.js';
import { type TraceMeasure, unformed } from './measure.js';
import { timeToStay } from './settling_time.js';

/** Time from the scenario's first event to the response's last entry into an absolute band around the target. */
export const recoveryTime: TraceMeasure = {
  description: {
    name: 'recovery_time',
    basis: 'trace',
    keys: [
      responseKey,
      targetKey,
      {
        name: 'band',
        kind: 'quantity',
        dimension: (of) => of,
        optional: false,
        meaning: 'half width of the band, in the unit of `of`',
      },
      ...windowKeys,
    ],
    dimension: () => timeDimension,
    ratio: false,
    better: 'lower',
    least: 0,
    window: 'from_first_event',
    meaning:
      'from the beginning of the window to the last entry of `of` into `to` ± band, staying inside to its end; s; 0 where it never leaves the band, never where it ends outside',
  },
  measure: ({ of, to, window, quantity }) => {
    if (!to) return unformed('there is no target');
    return timeToStay(difference(of, to), 0, quantity('band')!, window);
  },
};
