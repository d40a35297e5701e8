import { plainNumber } from '../spec/dimension.js';
import { type LoopMeasure, measured } from './measure.js';
import { ofStableLoop } from './stable_loop.js';

/** The least distance of the open loop's locus from −1. */
export const modulusMargin: LoopMeasure = {
  description: {
    name: 'modulus_margin',
    basis: 'loop',
    keys: [{ name: 'at', kind: 'loop_point', optional: false, meaning: 'where the loop is opened' }],
    dimension: () => plainNumber,
    ratio: true,
    better: 'higher',
    window: undefined,
    meaning: 'min |1 + L| over frequency = 1 / max |S|; a plain number; 0 when the closed loop is unstable',
  },
  measure: (margins) => ofStableLoop(margins, 0, () => measured(margins.modulusMargin)),
};
