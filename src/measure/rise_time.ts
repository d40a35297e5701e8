import { timeDimension } from '../spec/dimension.js';
import { largest } from './extremes.js';
import { responseKey, stepKey } from './keys.js';
import { measured, type TraceMeasure, unformed } from './measure.js';
import { firstReach, neverReached, stepShare } from './step_level.js';

/**
 * Time from the response's first reaching a low share of the step to its first reaching a high one (10 % and 90 % unless
 * said otherwise). `never` where it does not reach the high one in the window.
 */
export const riseTime: TraceMeasure = {
  description: {
    name: 'rise_time',
    basis: 'trace',
    keys: [
      responseKey,
      stepKey,
      {
        name: 'low',
        kind: 'share',
        optional: true,
        meaning: 'share of the step where it begins; 10 % unless given',
      },
      {
        name: 'high',
        kind: 'share',
        optional: true,
        meaning: 'share of the step where it ends; 90 % unless given',
      },
    ],
    dimension: () => timeDimension,
    ratio: false,
    better: 'lower',
    least: 0,
    window: 'single_step_outlasting_limit',
    meaning:
      'from the first time `of` reaches before + low·(after − before) to the first time it reaches before + high·(after − before), after the step of `to`; s; never where it does not',
  },
  measure: ({ of, step, quantity }) => {
    if (!step) return unformed('the target makes no single step');
    const [low, high] = [quantity('low') ?? 0.1, quantity('high') ?? 0.9];
    if (!(low < high)) return unformed(`\`low\` (${low}) is not below \`high\` (${high})`);
    const share = stepShare(of, step);
    const begin = firstReach(share, low, step.time, step.until);
    const end = firstReach(share, high, step.time, step.until);
    if (begin !== undefined && end !== undefined) return measured(end - begin);
    const reached = largest(share, step.time, step.until).value;
    return neverReached(high, reached, step.until - step.time);
  },
};
