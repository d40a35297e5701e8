import { LoopError } from '../loop.js';
import type { Block } from './block.js';

/** One of the states that an observer of the same controller estimates. */
export const estimate: Block = {
  description: {
    key: 'estimate',
    rooms: ['controller'],
    takesInput: false,
    takesGain: false,
    settings: [
      {
        name: 'estimate',
        kind: 'estimates',
        optional: false,
        meaning: 'the observer, which names this signal among its states',
      },
    ],
    meaning: 'x̂ of the observer for the state of this name',
  },
  keepsRange: false,
  expand: (use, { published }) => {
    const [observer, ...others] = use.names('estimate');
    if (others.length > 0) {
      const message = `estimate of '${use.name}' names ${others.length + 1} observers; expected one`;
      throw new LoopError(message, use.place);
    }
    const estimates = published(observer);
    const found = estimates.get(use.name);
    if (found) return found;
    const known = [...estimates.keys()].map((name) => `'${name}'`).join(', ');
    throw new LoopError(
      `'${observer}' estimates no '${use.name}'; ${known ? `its states are ${known}` : 'it is no observer'}`,
      use.place,
    );
  },
};
