import { plainNumber } from '../spec/dimension.js';
import { type LoopMeasure, measured } from './measure.js';
import { ofStableLoop } from './stable_loop.js';

/** The phase (rad) that brings the loop to the edge of stability, the smallest in size over all gain crossovers. */
export const phaseMargin: LoopMeasure = {
  description: {
    name: 'phase_margin',
    basis: 'loop',
    keys: [{ name: 'at', kind: 'loop_point', optional: false, meaning: 'where the loop is opened' }],
    dimension: () => plainNumber,
    ratio: false,
    better: 'higher',
    window: undefined,
    meaning:
      'smallest |π + arg L| over all frequencies with |L| = 1; an angle; infinite without a crossover, 0 when the closed loop is unstable',
  },
  measure: (margins) => ofStableLoop(margins, 0, () => measured(margins.phaseMargin)),
};
