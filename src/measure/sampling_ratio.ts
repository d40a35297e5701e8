import { plainNumber } from '../spec/dimension.js';
import { loopPointKey } from './keys.js';
import { type LoopMeasure, measured } from './measure.js';
import { ofStableLoop } from './stable_loop.js';

/** How often the loop is sampled in a period of its bandwidth. */
export const samplingRatio: LoopMeasure = {
  description: {
    name: 'sampling_ratio',
    basis: 'loop',
    keys: [loopPointKey],
    dimension: () => plainNumber,
    ratio: false,
    better: 'higher',
    least: 0,
    window: undefined,
    meaning:
      'sampling frequency at the loop point over the `bandwidth`; a plain number; 0 without a bandwidth and when the closed loop is unstable',
  },
  measure: ({ loop }) =>
    ofStableLoop(loop, 0, () => measured((2 * Math.PI) / (loop.period * loop.bandwidth()))),
};
