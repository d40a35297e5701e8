import { plainNumber } from '../spec/dimension.js';
import { comparedLoopPointsKey } from './keys.js';
import { type LoopMeasure, measured } from './measure.js';
import { ofStableLoop } from './stable_loop.js';

/** The least distance of the open loop's locus from −1. */
export const modulusMargin: LoopMeasure = {
  description: {
    name: 'modulus_margin',
    basis: 'loop',
    keys: [comparedLoopPointsKey],
    dimension: () => plainNumber,
    ratio: true,
    better: 'higher',
    least: 0,
    window: undefined,
    meaning:
      'min |1 + L| over frequency = 1/max |S| (of several rates or signals: one over the largest singular value of the matrix S); a plain number; 0 when the closed loop is unstable',
  },
  measure: ({ loop }) =>
    ofStableLoop(loop, 0, () =>
      measured(loop.changes === 1 ? loop.margins().modulusMargin : loop.liftedMargins().modulusMargin),
    ),
};
