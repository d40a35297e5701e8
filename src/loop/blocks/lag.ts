import type { Block } from './block.js';
import { limitedRate } from './limited_rate.js';

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
    meaning: "T y' = gain · of − y; a `slew` bounds y'",
  },
  keepsRange: false,
  keepsSlew: true,
  expand: (use, { arithmetic, addState }) => {
    const state = addState(use.name, () => {
      const drive = arithmetic.multiply(use.gain(), use.input());
      const rate = arithmetic.divide(arithmetic.subtract(drive, state), use.setting('lag')!);
      return limitedRate(rate, use.slew(), arithmetic);
    });
    return state;
  },
};
