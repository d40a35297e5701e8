import { timeDimension } from '../../spec/dimension.js';
import type { Block } from './block.js';

/** A signal as it was some time ago, exactly. */
export const deadTime: Block = {
  description: {
    key: 'dead_time',
    rooms: ['plant'],
    takesInput: true,
    takesGain: true,
    settings: [
      {
        name: 'dead_time',
        kind: 'expression',
        optional: false,
        dimension: () => timeDimension,
        meaning: 'the time T; to the nearest nanosecond where it depends on parameters',
      },
    ],
    meaning: 'y(t) = gain · of(t − T), exact in traces and in frequency; before the start the value at rest',
  },
  keepsRange: false,
  expand: (use, { arithmetic, delayed }) =>
    arithmetic.multiply(use.gain(), delayed(use.input(), use.setting('dead_time')!)),
};
