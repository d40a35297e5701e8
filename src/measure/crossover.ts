import { rateDimension } from '../spec/dimension.js';
import { loopPointKey } from './keys.js';
import { type LoopMeasure, measured } from './measure.js';

/** The highest frequency at which the loop gain is one. */
export const crossover: LoopMeasure = {
  description: {
    name: 'crossover',
    basis: 'loop',
    keys: [loopPointKey],
    dimension: () => rateDimension,
    ratio: false,
    better: 'higher',
    least: 0,
    window: undefined,
    takesHertz: true,
    meaning:
      'highest frequency with |L| = 1 (of several rates: L as it is seen at one frequency of the closed loop, 1/S − 1 with S the part of the signal that has the frequency of a sine added to it); rad/s or Hz; 0 without one',
  },
  measure: ({ loop }) => measured(loop.crossovers().at(-1) ?? 0),
};
