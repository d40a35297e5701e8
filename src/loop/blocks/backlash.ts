import type { Block } from './block.js';

/** Play between a driver and what it drives: the output only moves when one side of the gap is in contact. */
export const backlash: Block = {
  description: {
    key: 'backlash',
    rooms: ['plant'],
    takesInput: true,
    takesGain: false,
    inputLikeOutput: true,
    settings: [
      {
        name: 'backlash',
        kind: 'expression',
        optional: false,
        dimension: ({ output }) => output,
        meaning: 'whole width b of the gap',
      },
    ],
    meaning:
      'y stays while |of − y| < b/2, and else follows of ∓ b/2 (play operator); starts at `start`, in the middle of the gap by default; a margin of a loop through it is unjudged',
  },
  keepsRange: false,
  expand: (use, { arithmetic: a, addMode }) => {
    const half = a.multiply(a.number(0.5), use.setting('backlash')!);
    const input = use.input();
    const played = a.apply(
      'limit',
      addMode(use.name, () => played),
      a.subtract(input, half),
      a.add(input, half),
    );
    return played;
  },
};
