import { LoopError } from '../loop.js';
import type { Block } from './block.js';
import { filtered, type Structure, structureSetting } from './difference_equation.js';

/** Second-order sections one after another. */
export const biquads: Block = {
  description: {
    key: 'biquads',
    main: 'sections',
    rooms: ['controller'],
    takesInput: true,
    takesGain: false,
    inputLikeOutput: true,
    settings: [
      {
        name: 'sections',
        kind: 'matrix',
        rows: 'plain',
        columns: 'plain',
        entry: 'ratio',
        optional: false,
        meaning: 'array of b0 b1 b2 a1 a2 for each section, a0 = 1',
      },
      structureSetting,
      {
        name: 'feedback_sign',
        kind: 'word',
        words: ['minus', 'plus'],
        optional: true,
        meaning: 'plus where a1 and a2 are stored negated and their products are added; minus by default',
      },
    ],
    meaning: 'each section: y = b0·x + b1·x₁ + b2·x₂ − a1·y₁ − a2·y₂, summed from left to right',
  },
  keepsRange: false,
  expand: (use, workshop) => {
    const coefficients = use.matrix('sections')!.flat();
    if (coefficients.length % 5 !== 0) {
      throw new LoopError(
        `biquads of '${use.name}' got ${coefficients.length} coefficients, expected 5 for each section (b0 b1 b2 a1 a2)`,
        use.place,
      );
    }
    const structure = (use.word('structure') ?? 'direct_1') as Structure;
    const feedback = use.word('feedback_sign') === 'plus' ? 'plus' : 'minus';
    let signal = use.input();
    for (let first = 0; first < coefficients.length; first += 5) {
      const name = `${use.name} section ${first / 5 + 1}`;
      const [b0, b1, b2, a1, a2] = coefficients.slice(first, first + 5);
      const section = { name, forward: [b0, b1, b2], back: [a1, a2], structure, feedback } as const;
      signal = filtered(section, signal, workshop);
    }
    return signal;
  },
};
