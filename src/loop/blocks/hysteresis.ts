import { plainNumber } from '../../spec/dimension.js';
import type { Node } from '../graph.js';
import type { Block } from './block.js';

/** A relay that switches on above one value and off below another. */
export const hysteresis: Block = {
  description: {
    key: 'hysteresis',
    rooms: ['plant', 'controller'],
    takesInput: true,
    takesGain: false,
    settings: [
      {
        name: 'on_above',
        kind: 'expression',
        optional: false,
        dimension: ({ input }) => input,
        meaning: 'switches on when the input is above',
      },
      {
        name: 'off_below',
        kind: 'expression',
        optional: false,
        dimension: ({ input }) => input,
        meaning: 'switches off when the input is below',
      },
      {
        name: 'on',
        kind: 'expression',
        optional: false,
        dimension: ({ output }) => output,
        meaning: 'output while it is on',
      },
      {
        name: 'off',
        kind: 'expression',
        optional: false,
        dimension: ({ output }) => output,
        meaning: 'output while it is off',
      },
      {
        name: 'starts_on',
        kind: 'expression',
        optional: true,
        dimension: () => plainNumber,
        meaning: '1 where it is on at the start; 0 by default',
      },
    ],
    meaning:
      'on when of > on_above, off when of < off_below, else as before; a margin of a loop through it is unjudged',
  },
  keepsRange: false,
  expand: (use, { arithmetic: a, room, addMode, addMemory }) => {
    const starts = use.setting('starts_on');
    const start = starts?.kind === 'number' ? starts.value : 0;
    const switched = (): Node => {
      const input = use.input();
      const stays = a.apply('choose', a.apply('less', input, use.setting('off_below')!), a.number(0), last);
      return a.apply('choose', a.apply('less', use.setting('on_above')!, input), a.number(1), stays);
    };
    const name = `${use.name} is on`;
    const last: Node =
      room === 'plant'
        ? addMode(name, 'at_jumps', () => switched(), start)
        : addMemory(name, () => switched());
    // In the plant a switch is found at its moment; in a controller the instant itself already counts.
    return a.apply('choose', room === 'plant' ? last : switched(), use.setting('on')!, use.setting('off')!);
  },
};
