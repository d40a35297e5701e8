import { plainNumber, quotientOf } from '../spec/dimension.js';
import { loopPointKey } from './keys.js';
import { type LoopMeasure, measured, unformed } from './measure.js';

/** How strongly the noise of a sensor drives an actuator through the closed loop. */
export const noiseGain: LoopMeasure = {
  description: {
    name: 'noise_gain',
    basis: 'loop',
    keys: [
      { ...loopPointKey, meaning: 'the sensor that noise is added to' },
      { name: 'of', kind: 'signal', optional: false, meaning: 'the actuator that it drives' },
    ],
    dimension: (of, at = plainNumber) => quotientOf(of, at),
    ratio: true,
    better: 'lower',
    least: 0,
    window: undefined,
    meaning:
      'standard deviation of `of` at the sampling instants of `at` over that of white noise added to its samples, the loop closed and linearised (H2 norm); in the unit of `of` per unit of `at`; infinite when the closed loop is unstable',
  },
  measure: ({ loop }) =>
    loop.noiseGain ? measured(loop.noiseGain()) : unformed('there is no actuator that noise drives'),
};
