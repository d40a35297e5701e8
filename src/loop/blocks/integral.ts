import { quotientOf, timeDimension } from '../../spec/dimension.js';
import type { TargetArithmetic } from '../arithmetic.js';
import type { Node } from '../graph.js';
import type { Block } from './block.js';

/** A continuous state whose rate of change is an expression, with stops that it cannot pass where they are given. */
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
      {
        name: 'low_stop',
        kind: 'expression',
        optional: true,
        dimension: ({ output }) => output,
        meaning: 'the signal cannot go below; it rests there while the rate is negative',
      },
      {
        name: 'high_stop',
        kind: 'expression',
        optional: true,
        dimension: ({ output }) => output,
        meaning: 'the signal cannot go above; it rests there while the rate is positive',
      },
    ],
    meaning: "x' = integral; starts at `start` where rest leaves it free",
  },
  keepsRange: false,
  expand: (use, { arithmetic: a, addState, addCorrection }) => {
    const [low, high] = [use.setting('low_stop'), use.setting('high_stop')];
    const state = addState(use.name, () => {
      let rate = use.setting('integral')!;
      if (low) rate = inward(a, rate, a.apply('less_or_equal', state, low), 'max');
      if (high) rate = inward(a, rate, a.apply('less_or_equal', high, state), 'min');
      return rate;
    });
    if (low || high) {
      addCorrection(state, () => {
        const above = low ? a.apply('max', state, low) : state;
        return high ? a.apply('min', above, high) : above;
      });
    }
    return state;
  },
};

/** At a stop only a rate away from it counts. */
function inward(a: TargetArithmetic, rate: Node, atStop: Node, side: 'max' | 'min'): Node {
  return a.apply('choose', atStop, a.apply(side, rate, a.number(0)), rate);
}
