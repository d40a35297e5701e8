import { plainNumber } from '../spec/dimension.js';
import { type LoopMeasure, measured } from './measure.js';
import { ofStableLoop } from './stable_loop.js';

/** The smaller of the factors by which the loop gain may be multiplied or divided before the loop is unstable. */
export const gainMargin: LoopMeasure = {
  description: {
    name: 'gain_margin',
    basis: 'loop',
    keys: [{ name: 'at', kind: 'loop_point', optional: false, meaning: 'where the loop is opened' }],
    dimension: () => plainNumber,
    ratio: true,
    better: 'higher',
    window: undefined,
    meaning:
      'smallest factor above one by which the gain may be multiplied or divided, from L real and negative; a ratio or dB; infinite where there is none, 1 when the closed loop is unstable',
  },
  measure: (margins) => ofStableLoop(margins, 1, () => measured(margins.gainMargin.ratio)),
};
