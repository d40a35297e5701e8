import { rateDimension } from '../spec/dimension.js';
import { loopPointsKey } from './keys.js';
import { type LoopMeasure, measured } from './measure.js';

/** How far the slowest mode of the closed loop is from not dying out. */
export const stability: LoopMeasure = {
  description: {
    name: 'stability',
    basis: 'loop',
    keys: [loopPointsKey],
    dimension: () => rateDimension,
    ratio: false,
    better: 'higher',
    window: undefined,
    meaning:
      'decay rate of the slowest mode of the closed loop, −ln|z|/T for the largest eigenvalue z of its movement over a cycle of length T; 1/s; negative when unstable',
  },
  measure: ({ loop }) =>
    measured(loop.changes === 1 ? loop.closedLoopDecay().decayRate : loop.liftedMargins().decayRate),
};
