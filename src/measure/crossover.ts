import { rateDimension } from '../spec/dimension.js';
import { loopPointKey } from './keys.js';
import { type LoopMeasure, measured } from './measure.js';
import { ofSingleRate } from './stable_loop.js';

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
    meaning: 'highest frequency with |L| = 1; rad/s or Hz; 0 without one',
  },
  measure: ({ loop }) =>
    ofSingleRate(loop, () => measured(loop.margins().gainCrossings.at(-1)?.frequency ?? 0)),
};
