import { timeDimension } from '../spec/dimension.js';
import { difference } from './curve_arithmetic.js';
import { integral } from './integrals.js';
import { responseKey, targetKey, windowKeys } from './keys.js';
import { measured, type TraceMeasure, unformed } from './measure.js';

/** The mean goes over this share of the window, at its end, unless the spec says how long. */
const lastShare = 0.1;

/** The size of the mean tracking error at the end of a window. */
export const steadyStateError: TraceMeasure = {
  description: {
    name: 'steady_state_error',
    basis: 'trace',
    keys: [
      responseKey,
      targetKey,
      {
        name: 'over',
        kind: 'quantity',
        dimension: () => timeDimension,
        optional: true,
        meaning: 'length of the mean at the end of the window; a tenth of the window unless given',
      },
      ...windowKeys,
    ],
    dimension: (of) => of,
    ratio: false,
    better: 'lower',
    least: 0,
    window: 'from_first_event',
    meaning: '|mean of (of − to)| over the last part of the window, of length `over`; in the unit of `of`',
  },
  measure: ({ of, to, window, quantity }) => {
    if (!to) return unformed('there is no target');
    const length = quantity('over') ?? lastShare * (window.until - window.from);
    const from = window.until - length;
    if (from < window.from) return unformed(`\`over\` (${length} s) is longer than the window`);
    return measured(Math.abs(integral(difference(of, to), { from, until: window.until })) / length);
  },
};
