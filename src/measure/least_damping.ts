import { plainNumber } from '../spec/dimension.js';
import { loopPointKey } from './keys.js';
import { type LoopMeasure, measured } from './measure.js';

/** The damping ratio of the least damped mode of the closed loop. */
export const leastDamping: LoopMeasure = {
  description: {
    name: 'least_damping',
    basis: 'loop',
    keys: [loopPointKey],
    dimension: () => plainNumber,
    ratio: false,
    better: 'higher',
    most: 1,
    window: undefined,
    meaning:
      'least −Re s/|s| over the modes of the closed loop, s = ln(z)/T (of several rates: z over a cycle, ω = Im s that of the sine which is strongest in the signal); a plain number from 1 (no oscillation) to 0; negative when unstable',
  },
  measure: ({ loop }) => measured(loop.leastDamping()),
};
