import { timeDimension } from '../spec/dimension.js';
import { largest } from './extremes.js';
import { responseKey, stepKey } from './keys.js';
import { measured, type TraceMeasure, unformed } from './measure.js';
import { firstReach, neverReached, stepShare } from './step_level.js';

/** The share of a step that a delay is counted to. */
const half = 0.5;

/** Time from the step of the target to the response's first reaching half of it, or another share. */
export const delayTime: TraceMeasure = {
  description: {
    name: 'delay_time',
    basis: 'trace',
    keys: [
      responseKey,
      stepKey,
      { name: 'share', kind: 'share', optional: true, meaning: 'share of the step; 50 % unless given' },
    ],
    dimension: () => timeDimension,
    ratio: false,
    better: 'lower',
    least: 0,
    window: 'single_step_outlasting_limit',
    meaning:
      'from the step of `to` to the first time `of` reaches before + share·(after − before); s; never where it does not',
  },
  measure: ({ of, step, quantity }) => {
    if (!step) return unformed('the target makes no single step');
    const level = quantity('share') ?? half;
    const curve = stepShare(of, step);
    const time = firstReach(curve, level, step.time, step.until);
    if (time !== undefined) return measured(time - step.time);
    return neverReached(level, largest(curve, step.time, step.until).value, step.until - step.time);
  },
};
