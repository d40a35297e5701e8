import { plainNumber } from '../spec/dimension.js';
import { largest, smallest } from './extremes.js';
import { responseKey, stepKey } from './keys.js';
import { measured, type TraceMeasure, unformed } from './measure.js';

/**
 * How far the response goes past the target's new value, in the direction of the step, as a share of the step:
 * max(0, (y − after)/(after − before)) from the step to the target's next change.
 */
export const overshoot: TraceMeasure = {
  description: {
    name: 'overshoot',
    basis: 'trace',
    keys: [responseKey, stepKey],
    dimension: () => plainNumber,
    ratio: false,
    better: 'lower',
    least: 0,
    window: 'single_step',
    meaning:
      'max(0, (of − after)/(after − before)), from the step of `to` (from before to after) to its next change; a share',
  },
  measure: ({ of, step }) => {
    if (!step) return unformed('the target makes no single step');
    const { before, after, time, until } = step;
    const size = Math.abs(after - before);
    // Without scaling, so that a response which ends exactly at the target has no overshoot at all.
    const past =
      after > before ? largest(of, time, until).value - after : after - smallest(of, time, until).value;
    return measured(Math.max(0, past / size));
  },
};
