import type { Block } from './block.js';

/** Nothing inside a band around zero, and the distance from the band outside. */
export const deadBand: Block = {
  description: {
    key: 'dead_band',
    rooms: ['plant', 'controller'],
    takesInput: true,
    takesGain: false,
    inputLikeOutput: true,
    settings: [
      {
        name: 'dead_band',
        kind: 'expression',
        optional: false,
        dimension: ({ output }) => output,
        meaning: 'half width b of the band',
      },
    ],
    meaning: 'y = of − b above b, of + b below −b, 0 between',
  },
  keepsRange: false,
  expand: (use, { arithmetic: a }) => {
    const band = use.setting('dead_band')!;
    const input = use.input();
    // Not as the input less its limited self: a limit at its end has no slope, but a band has one on each side.
    const below = a.apply('less', input, a.apply('negate', band));
    const lower = a.apply('choose', below, a.add(input, band), a.number(0));
    return a.apply('choose', a.apply('less', band, input), a.subtract(input, band), lower);
  },
};
