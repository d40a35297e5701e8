import { scaled } from './curve.js';
import { integral, rootMeanSquare } from './integrals.js';
import { signalKey, windowKeys } from './keys.js';
import { measured, type TraceMeasure } from './measure.js';

/** How much an actuator moves about its mean in a window: what noise and quanta make it do where nothing else happens. */
export const activity: TraceMeasure = {
  description: {
    name: 'activity',
    basis: 'trace',
    keys: [signalKey, ...windowKeys],
    dimension: (of) => of,
    ratio: false,
    better: 'lower',
    least: 0,
    window: 'from_first_event',
    meaning:
      'root mean square of `of` less its mean over the window: what noise and quanta drive where nothing else happens; in the unit of `of`',
  },
  measure: ({ of, window }) => {
    const mean = integral(of, window) / (window.until - window.from);
    return measured(rootMeanSquare(scaled(of, 1, -mean), window));
  },
};
