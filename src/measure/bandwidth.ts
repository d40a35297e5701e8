import { rateDimension } from '../spec/dimension.js';
import { loopPointKey } from './keys.js';
import { type LoopMeasure, measured } from './measure.js';
import { ofStableLoop } from './stable_loop.js';

/** Up to which frequency the closed loop follows. */
export const bandwidth: LoopMeasure = {
  description: {
    name: 'bandwidth',
    basis: 'loop',
    keys: [loopPointKey],
    dimension: () => rateDimension,
    ratio: false,
    better: 'higher',
    least: 0,
    window: undefined,
    takesHertz: true,
    meaning:
      'first frequency at which |L/(1 + L)| falls to 1/√2 of its value at zero frequency (of several rates: the part of L(I + L)⁻¹ that has the frequency of the sine put in); rad/s or Hz; infinite where it never does up to half the sampling frequency, 0 when the closed loop is unstable',
  },
  measure: ({ loop }) => ofStableLoop(loop, 0, () => measured(loop.bandwidth())),
};
