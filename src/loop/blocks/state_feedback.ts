import { LoopError } from '../loop.js';
import type { Block } from './block.js';

/** A sum of states, each by its gain. */
export const stateFeedback: Block = {
  description: {
    key: 'state_feedback',
    rooms: ['controller'],
    takesInput: false,
    takesGain: false,
    settings: [
      {
        name: 'states',
        kind: 'signals',
        optional: false,
        meaning: 'the signals fed back: sensors or estimates',
      },
      {
        name: 'gains',
        kind: 'matrix',
        rows: 'output',
        columns: { of: 'states' },
        entry: 'ratio',
        optional: false,
        meaning: 'one gain k for each state: a list, or an array of the build',
      },
      {
        name: 'targets',
        kind: 'matrix',
        rows: { of: 'states' },
        columns: 'plain',
        entry: 'ratio',
        optional: true,
        meaning: 'what each state should be; 0 by default',
      },
    ],
    meaning:
      'u = k1·(t1 − x1) + k2·(t2 − x2) + …, summed from left to right; without targets u = −(k1·x1 + k2·x2 + …)',
  },
  keepsRange: false,
  expand: (use, { arithmetic }) => {
    const states = use.signals('states').map((state) => state());
    const gains = use.matrix('gains')!.flat();
    const targets = use.matrix('targets')?.flat();
    for (const [name, list] of Object.entries({ gains, targets: targets ?? states })) {
      if (list.length === states.length) continue;
      throw new LoopError(
        `state_feedback of '${use.name}' has ${list.length} ${name} for ${states.length} states; expected one for each`,
        use.place,
      );
    }
    const taken = states.map((state, at) => (targets ? arithmetic.subtract(targets[at], state) : state));
    const sum = arithmetic.sumOfProducts(gains, taken);
    return targets ? sum : arithmetic.apply('negate', sum);
  },
};
