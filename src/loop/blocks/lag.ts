import type { Block } from './block.js';
import { limitedRate } from './limited_rate.js';

/** A time constant that a parameter brings to zero counts as this, s: the lag has vanished, and its rate stays finite. */
const leastTime = 1e-9;

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
        meaning: 'time constant T, or a corner frequency f with T = 1/(2π f); one below 1 ns counts as 1 ns',
      },
    ],
    meaning: "T y' = gain · of − y; a `slew` bounds y'",
  },
  keepsRange: false,
  keepsSlew: true,
  expand: (use, { arithmetic, addState }) => {
    const state = addState(use.name, () => {
      const timeConstant = arithmetic.apply('max', use.setting('lag')!, arithmetic.number(leastTime));
      const drive = arithmetic.multiply(use.gain(), use.input());
      const rate = arithmetic.divide(arithmetic.subtract(drive, state), timeConstant);
      return limitedRate(rate, use.slew(), arithmetic);
    });
    return state;
  },
};
