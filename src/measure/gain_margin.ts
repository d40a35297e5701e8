import { plainNumber } from '../spec/dimension.js';
import { loopPointsKey } from './keys.js';
import { type LoopMeasure, measured } from './measure.js';
import { ofStableLoop } from './stable_loop.js';

/** The smaller of the factors by which the loop gain may be multiplied or divided before the loop is unstable. */
export const gainMargin: LoopMeasure = {
  description: {
    name: 'gain_margin',
    basis: 'loop',
    keys: [loopPointsKey],
    dimension: () => plainNumber,
    ratio: true,
    better: 'higher',
    least: 1,
    window: undefined,
    meaning:
      'smallest factor above one by which the gain may be multiplied or divided, from L real and negative (of several rates or signals: from an eigenvalue of the matrix L, with the same factor on all at once); a ratio or dB; infinite where there is none, 1 when the closed loop is unstable',
  },
  measure: ({ loop }) =>
    ofStableLoop(loop, 1, () =>
      measured(loop.changes === 1 ? loop.margins().gainMargin.ratio : loop.liftedMargins().gainMargin.ratio),
    ),
};
