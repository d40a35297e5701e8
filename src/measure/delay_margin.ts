import { timeDimension } from '../spec/dimension.js';
import { loopPointKey } from './keys.js';
import { type LoopMeasure, measured } from './measure.js';
import { ofSingleRate, ofStableLoop } from './stable_loop.js';

/** The delay (s) that brings the loop to the edge of stability: the smallest phase/ω over all gain crossovers. */
export const delayMargin: LoopMeasure = {
  description: {
    name: 'delay_margin',
    basis: 'loop',
    keys: [loopPointKey],
    dimension: () => timeDimension,
    ratio: false,
    better: 'higher',
    least: 0,
    window: undefined,
    meaning:
      'smallest (π + arg L)/ω, counted from 0 to 2π, over all frequencies with |L| = 1; s; infinite without a crossover, 0 when the closed loop is unstable',
  },
  measure: ({ loop }) =>
    ofStableLoop(loop, 0, () => ofSingleRate(loop, () => measured(loop.margins().delayMargin))),
};
