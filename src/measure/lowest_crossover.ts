import { rateDimension } from '../spec/dimension.js';
import { loopPointKey } from './keys.js';
import { type LoopMeasure, measured } from './measure.js';

/** The lowest frequency at which the loop gain is one. */
export const lowestCrossover: LoopMeasure = {
  description: {
    name: 'lowest_crossover',
    basis: 'loop',
    keys: [loopPointKey],
    dimension: () => rateDimension,
    ratio: false,
    better: 'higher',
    least: 0,
    window: undefined,
    takesHertz: true,
    meaning:
      'lowest frequency with |L| = 1 (of several rates: L as for `crossover`); rad/s or Hz; 0 without one',
  },
  measure: ({ loop }) => measured(loop.crossovers()[0] ?? 0),
};
