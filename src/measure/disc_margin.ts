import { plainNumber } from '../spec/dimension.js';
import { comparedLoopPointsKey } from './keys.js';
import { type LoopMeasure, measured } from './measure.js';
import { ofStableLoop } from './stable_loop.js';

/** How far gain and phase may change at the same time. */
export const discMargin: LoopMeasure = {
  description: {
    name: 'disc_margin',
    basis: 'loop',
    keys: [comparedLoopPointsKey],
    dimension: () => plainNumber,
    ratio: false,
    better: 'higher',
    least: 0,
    most: 2,
    window: undefined,
    meaning:
      'α = 1/max |S − 1/2| over frequency (of several rates or signals: one over the largest singular value of the matrix S − I/2): factors (1 + αδ/2)/(1 − αδ/2), |δ| < 1, on the loop leave it stable, of several signals each with a δ of its own at the same time, so that it is then a guaranteed lower bound; a plain number; 0 when the closed loop is unstable',
  },
  measure: ({ loop }) =>
    ofStableLoop(loop, 0, () =>
      measured(loop.changes === 1 ? loop.discMargin().margin : loop.liftedMargins().discMargin),
    ),
};
