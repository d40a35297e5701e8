import { plainNumber } from '../spec/dimension.js';
import { largest, scaled } from './extremes.js';
import { measured, type TraceMeasure, unformed } from './measure.js';

/**
 * How far the response goes past the target's new value, in the direction of the step, as a share of the step:
 * max(0, (y − after)·sign(after − before)) / |after − before| from the step to the target's next change.
 */
export const overshoot: TraceMeasure = {
  description: {
    name: 'overshoot',
    basis: 'trace',
    keys: [
      { name: 'of', kind: 'signal', optional: false, meaning: 'the response' },
      { name: 'to', kind: 'target', optional: false, meaning: 'the input that makes one step' },
    ],
    dimension: () => plainNumber,
    ratio: false,
    better: 'lower',
    window: 'single_step',
    meaning:
      'max(0, (of − after)·sign(after − before)) / |after − before|, from the step of `to` to its next change; a share',
  },
  measure: ({ of, step }) => {
    if (!step) return unformed('the target makes no single step');
    const size = step.after - step.before;
    const direction = Math.sign(size);
    const peak = largest(direction < 0 ? scaled(of, -1) : of, step.time, step.until).value;
    return measured(Math.max(0, (peak - direction * step.after) / Math.abs(size)));
  },
};
