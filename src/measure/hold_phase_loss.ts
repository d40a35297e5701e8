import { plainNumber } from '../spec/dimension.js';
import { loopPointKey } from './keys.js';
import { type LoopMeasure, measured } from './measure.js';

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
      'ω·T/2 at the `crossover` ω, T being the time between two changes of the signal at the loop point; an angle; 0 without a crossover',
  },
  measure: ({ loop }) => measured(((loop.crossovers().at(-1) ?? 0) * loop.period) / 2),
};
