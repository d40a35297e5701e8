import { plainNumber, quotientOf, timeDimension } from '../../spec/dimension.js';
import type { TargetArithmetic } from '../arithmetic.js';
import type { Node } from '../graph.js';
import type { Block } from './block.js';
import { limitedRate } from './limited_rate.js';

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
      {
        name: 'reset_when',
        kind: 'expression',
        optional: true,
        dimension: () => plainNumber,
        meaning: 'a condition: each time that it becomes true the signal jumps to reset_to',
      },
      {
        name: 'reset_to',
        kind: 'expression',
        optional: true,
        dimension: ({ output }) => output,
        meaning: 'where a reset brings the signal; 0 by default',
      },
    ],
    meaning: "x' = integral; starts at `start` where rest leaves it free; a `slew` bounds x'",
  },
  keepsRange: false,
  keepsSlew: true,
  expand: (use, { arithmetic: a, addState, addMode, addCorrection }) => {
    const [low, high] = [use.setting('low_stop'), use.setting('high_stop')];
    const state = addState(use.name, () => {
      let rate = limitedRate(use.setting('integral')!, use.slew(), a);
      if (low) rate = inward(a, rate, a.apply('less_or_equal', state, low), 'max');
      if (high) rate = inward(a, rate, a.apply('less_or_equal', high, state), 'min');
      return rate;
    });
    const resets = use.has('reset_when');
    if (!low && !high && !resets) return state;
    const condition = (): Node => a.apply('unequal', use.setting('reset_when')!, a.number(0));
    const was = resets ? addMode(`${use.name} reset condition`, 'at_jumps', condition, 0) : undefined;
    addCorrection(state, () => {
      const above = low ? a.apply('max', state, low) : state;
      const inside = high ? a.apply('min', above, high) : above;
      if (!was) return inside;
      const target = use.setting('reset_to') ?? a.number(0);
      const stays = a.apply('choose', was, inside, target);
      return a.apply('choose', condition(), stays, inside);
    });
    return state;
  },
};

/** At a stop only a rate away from it counts. */
function inward(a: TargetArithmetic, rate: Node, atStop: Node, side: 'max' | 'min'): Node {
  return a.apply('choose', atStop, a.apply(side, rate, a.number(0)), rate);
}
