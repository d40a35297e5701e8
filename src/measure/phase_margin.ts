import { plainNumber } from '../spec/dimension.js';
import { loopPointsKey } from './keys.js';
import { type LoopMeasure, measured } from './measure.js';
import { ofStableLoop } from './stable_loop.js';

/** The smallest phase change that brings the loop to the edge of stability, in size over all gain crossovers. */
export const phaseMargin: LoopMeasure = {
  description: {
    name: 'phase_margin',
    basis: 'loop',
    keys: [loopPointsKey],
    dimension: () => plainNumber,
    ratio: false,
    better: 'higher',
    least: 0,
    most: Math.PI,
    window: undefined,
    meaning:
      'smallest |π + arg L| over all frequencies with |L| = 1 (of several rates or signals: with an eigenvalue of the matrix L of size 1, and the same phase on all at once); an angle; infinite without a crossover, 0 when the closed loop is unstable',
  },
  measure: ({ loop }) =>
    ofStableLoop(loop, 0, () =>
      measured(loop.changes === 1 ? loop.margins().phaseMargin : loop.liftedMargins().phaseMargin),
    ),
};
