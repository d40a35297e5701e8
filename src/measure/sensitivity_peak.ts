import { plainNumber } from '../spec/dimension.js';
import { comparedLoopPointsKey } from './keys.js';
import { type LoopMeasure, measured } from './measure.js';
import { ofStableLoop } from './stable_loop.js';

/** The largest gain from a disturbance at the loop point to the signal there. */
export const sensitivityPeak: LoopMeasure = {
  description: {
    name: 'sensitivity_peak',
    basis: 'loop',
    keys: [comparedLoopPointsKey],
    dimension: () => plainNumber,
    ratio: true,
    better: 'lower',
    least: 0,
    window: undefined,
    meaning:
      'max |S| over frequency, S = 1/(1 + L) (of several rates or signals: the largest singular value of the matrix S); a ratio or dB; infinite when the closed loop is unstable',
  },
  measure: ({ loop }) =>
    ofStableLoop(loop, Number.POSITIVE_INFINITY, () =>
      measured(
        loop.changes === 1 ? loop.margins().sensitivityPeak.value : loop.liftedMargins().sensitivityPeak,
      ),
    ),
};
