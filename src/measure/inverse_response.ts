import { plainNumber } from '../spec/dimension.js';
import { largest, smallest } from './extremes.js';
import { responseKey, stepKey } from './keys.js';
import { measured, type TraceMeasure, unformed } from './measure.js';

/** How far the response goes the wrong way, as a share of the step: max(0, (before − y)/(after − before)). */
export const inverseResponse: TraceMeasure = {
  description: {
    name: 'inverse_response',
    basis: 'trace',
    keys: [responseKey, stepKey],
    dimension: () => plainNumber,
    ratio: false,
    better: 'lower',
    least: 0,
    window: 'single_step',
    meaning:
      'max(0, (before − of)/(after − before)), from the step of `to` (from before to after) to its next change: how far the response goes the wrong way; a share',
  },
  measure: ({ of, step }) => {
    if (!step) return unformed('the target makes no single step');
    const { before, after, time, until } = step;
    const size = Math.abs(after - before);
    const back =
      after > before ? before - smallest(of, time, until).value : largest(of, time, until).value - before;
    return measured(Math.max(0, back / size));
  },
};
