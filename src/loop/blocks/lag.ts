import type { Block } from './block.js';

/** A first-order lag. */
export const lag: Block = {
  description: {
    key: 'lag',
    rooms: ['plant'],
    takesInput: true,
    takesGain: true,
    outputIsState: true,
    settings: [
      {
        name: 'lag',
        kind: 'time_constant',
        optional: false,
        meaning: 'time constant T, or a corner frequency f with T = 1/(2π f)',
      },
    ],
    meaning: "T y' = gain · of − y",
  },
  keepsRange: false,
  expand: (use, { arithmetic, addState }) => {
    const state = addState(use.name, () => {
      const drive = arithmetic.multiply(use.gain(), use.input());
      return arithmetic.divide(arithmetic.subtract(drive, state), use.setting('lag')!);
    });
    return state;
  },
};
