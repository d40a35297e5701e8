import { plainNumber, timeDimension } from '../../spec/dimension.js';
import type { Shape } from './shape.js';

/** Equal steps one after another. */
export const staircase: Shape = {
  description: {
    key: 'staircase',
    length: 'none',
    isStep: false,
    settings: [
      {
        name: 'rise',
        kind: 'expression',
        optional: false,
        dimension: (input) => input,
        meaning: 'height of a step',
      },
      {
        name: 'every',
        kind: 'expression',
        optional: false,
        dimension: () => timeDimension,
        meaning: 'time from one step to the next',
      },
      {
        name: 'steps',
        kind: 'expression',
        optional: false,
        dimension: () => plainNumber,
        meaning: 'number of steps',
      },
    ],
    meaning: 'the first step at `at`; the last value stays',
  },
  build: (use, desk) => {
    desk.add((plant) => {
      const [start, every, value] = [
        plant.of(use.at),
        plant.of(use.setting('every')!),
        plant.of(use.setting('rise')!),
      ];
      const count = Math.max(0, Math.round(plant.of(use.setting('steps')!)));
      return Array.from({ length: count }, (_, k) => ({ time: start + k * every, value }));
    });
    return undefined;
  },
};
