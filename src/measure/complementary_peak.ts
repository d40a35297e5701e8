import { plainNumber } from '../spec/dimension.js';
import { comparedLoopPointsKey } from './keys.js';
import { type LoopMeasure, measured } from './measure.js';
import { ofStableLoop } from './stable_loop.js';

/** The largest gain around the closed loop. */
export const complementaryPeak: LoopMeasure = {
  description: {
    name: 'complementary_peak',
    basis: 'loop',
    keys: [comparedLoopPointsKey],
    dimension: () => plainNumber,
    ratio: true,
    better: 'lower',
    least: 0,
    window: undefined,
    meaning:
      'max |L/(1 + L)| over frequency (of several rates or signals: the largest singular value of the matrix L(I + L)⁻¹); a ratio or dB; infinite when the closed loop is unstable',
  },
  measure: ({ loop }) =>
    ofStableLoop(loop, Number.POSITIVE_INFINITY, () =>
      measured(
        loop.changes === 1 ? loop.margins().complementaryPeak.value : loop.liftedMargins().complementaryPeak,
      ),
    ),
};
