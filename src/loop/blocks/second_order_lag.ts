import { plainNumber } from '../../spec/dimension.js';
import type { Block } from './block.js';

/** A second-order lag, such as a mass on a spring or a sensor with a resonance. */
export const secondOrderLag: Block = {
  description: {
    key: 'second_order_lag',
    rooms: ['plant'],
    takesInput: true,
    takesGain: true,
    outputIsState: true,
    settings: [
      { name: 'corner', kind: 'corner', optional: false, meaning: 'natural frequency ω' },
      {
        name: 'damping',
        kind: 'expression',
        optional: false,
        dimension: () => plainNumber,
        meaning: 'damping ratio ζ',
      },
    ],
    meaning: "y'' = ω²·(gain · of − y) − 2·ζ·ω·y'",
  },
  keepsRange: false,
  expand: (use, { arithmetic: a, addState }) => {
    const corner = use.setting('corner')!;
    const output = addState(use.name, () => rate);
    const rate = addState(
      `${use.name} rate`,
      () => {
        const pull = a.subtract(a.multiply(use.gain(), use.input()), output);
        const drag = a.multiply(a.multiply(a.number(2), use.setting('damping')!), rate);
        return a.multiply(corner, a.subtract(a.multiply(corner, pull), drag));
      },
      0,
    );
    return output;
  },
};
