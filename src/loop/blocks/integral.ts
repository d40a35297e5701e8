import { quotientOf, timeDimension } from '../../spec/dimension.js';
import type { Block } from './block.js';

/** A continuous state whose rate of change is an expression. */
export const integral: Block = {
  description: {
    key: 'integral',
    rooms: ['plant'],
    takesInput: false,
    takesGain: false,
    outputIsState: true,
    settings: [
      {
        name: 'integral',
        kind: 'expression',
        optional: false,
        dimension: ({ output }) => quotientOf(output, timeDimension),
        meaning: 'rate of change of the signal',
      },
    ],
    meaning: "x' = integral; starts at `start` where rest leaves it free",
  },
  keepsRange: false,
  expand: (use, workshop) => workshop.addState(use.name, () => use.setting('integral')!),
};
