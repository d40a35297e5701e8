import type { Node } from '../graph.js';
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
  expand: (use, { arithmetic: a, addMode, rateOf }) => {
    const half = a.multiply(a.number(0.5), use.setting('backlash')!);
    const input = use.input();
    const [low, high] = [a.subtract(input, half), a.add(input, half)];
    const [one, zero, minusOne] = [1, 0, -1].map((value) => a.number(value));
    const position: Node = addMode(use.name, 'after_steps', () => output);
    // The side of the gap in contact: 1 pushes up, −1 pulls down. It ends when the driver turns round.
    const contact: Node = addMode(
      `${use.name} contact`,
      'at_jumps',
      () => {
        const rate = rateOf(input);
        const closing = a.apply(
          'choose',
          a.apply('less', position, low),
          one,
          a.apply('choose', a.apply('less', high, position), minusOne, zero),
        );
        const pulling = a.apply(
          'choose',
          isSide(minusOne),
          a.apply('choose', a.apply('less', zero, rate), zero, minusOne),
          closing,
        );
        return a.apply(
          'choose',
          isSide(one),
          a.apply('choose', a.apply('less', rate, zero), zero, one),
          pulling,
        );
      },
      0,
    );
    const isSide = (side: Node): Node => a.apply('equal', contact, side);
    const free = a.apply('limit', position, low, high);
    const output: Node = a.apply('choose', isSide(one), low, a.apply('choose', isSide(minusOne), high, free));
    return output;
  },
};
