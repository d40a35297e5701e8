import type { Shape } from './shape.js';

/** A change that stays. */
export const step: Shape = {
  description: {
    key: 'step',
    length: 'none',
    isStep: true,
    settings: [
      {
        name: 'step',
        kind: 'expression',
        optional: false,
        dimension: (input) => input,
        meaning: 'size of the change',
      },
    ],
    meaning: 'the size from `at` on',
  },
  build: (use, desk) => {
    desk.add((plant) => [{ time: plant.of(use.at), value: plant.of(use.setting('step')!) }]);
    return undefined;
  },
};
