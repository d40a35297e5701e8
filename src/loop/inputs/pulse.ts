import { endOf, type Shape } from './shape.js';

/** A change that ends. */
export const pulse: Shape = {
  description: {
    key: 'pulse',
    length: 'needed',
    isStep: true,
    settings: [
      { name: 'pulse', kind: 'expression', optional: false, dimension: (input) => input, meaning: 'height' },
    ],
    meaning: 'the height from `at` for the time `for`',
  },
  build: (use, desk) => {
    desk.add((plant) => {
      const value = plant.of(use.setting('pulse')!);
      return [
        { time: plant.of(use.at), value },
        { time: endOf(use, plant), value: -value },
      ];
    });
    return undefined;
  },
};
