import { plainNumber } from '../spec/dimension.js';
import { loopPointKey } from './keys.js';
import { type LoopMeasure, measured } from './measure.js';
import { ofSingleRate } from './stable_loop.js';

/** The phase that holding the actuator between samples costs at the crossover. */
export const holdPhaseLoss: LoopMeasure = {
  description: {
    name: 'hold_phase_loss',
    basis: 'loop',
    keys: [loopPointKey],
    dimension: () => plainNumber,
    ratio: false,
    better: 'lower',
    least: 0,
    window: undefined,
    meaning:
      'ω·T/2 at the highest frequency ω with |L| = 1, T being the sampling period at the loop point; an angle; 0 without a crossover',
  },
  measure: ({ loop }) =>
    ofSingleRate(loop, () =>
      measured(((loop.margins().gainCrossings.at(-1)?.frequency ?? 0) * loop.period) / 2),
    ),
};
