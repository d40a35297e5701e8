import { plainNumber } from '../spec/dimension.js';
import { responseKey, stepKey } from './keys.js';
import { measured, type TraceMeasure, unformed } from './measure.js';
import { stepShare } from './step_level.js';
import { turningPoints } from './turning_points.js';

/** The second peak past the target's new value over the first one; zero without a second one. */
export const decayRatio: TraceMeasure = {
  description: {
    name: 'decay_ratio',
    basis: 'trace',
    keys: [responseKey, stepKey],
    dimension: () => plainNumber,
    ratio: false,
    better: 'lower',
    least: 0,
    window: 'single_step',
    meaning:
      '(second peak − after)/(first peak − after) of `of`, peaks beyond the value of `to` after its step only; a share; 0 without a second such peak',
  },
  measure: ({ of, step }) => {
    if (!step) return unformed('the target makes no single step');
    const window = { from: step.time, until: step.until };
    const peaks = turningPoints(stepShare(of, step), window, 0).filter(
      ({ kind, value }) => kind === 'maximum' && value > 1,
    );
    return measured(peaks.length < 2 ? 0 : (peaks[1].value - 1) / (peaks[0].value - 1));
  },
};
