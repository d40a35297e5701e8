import type { Block } from './block.js';

/** A signal which is an expression of others. */
export const value: Block = {
  description: {
    key: 'value',
    rooms: ['plant', 'controller'],
    takesInput: false,
    takesGain: false,
    settings: [
      {
        name: 'value',
        kind: 'expression',
        optional: false,
        dimension: ({ output }) => output,
        meaning: 'the expression',
      },
    ],
    meaning: 'y = value; in a controller `before(x)` is x at the previous sampling instant',
  },
  keepsRange: false,
  expand: (use) => use.setting('value')!,
};
