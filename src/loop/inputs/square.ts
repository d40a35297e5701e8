import { frequencyDimension } from '../../spec/dimension.js';
import { type Change, endOf, type Shape } from './shape.js';

/** More edges than this in a scenario are a mistake in a unit. */
const mostEdges = 1e6;

/** A value that changes sides. */
export const square: Shape = {
  description: {
    key: 'square',
    length: 'optional',
    isStep: false,
    settings: [
      {
        name: 'amplitude',
        kind: 'expression',
        optional: false,
        dimension: (input) => input,
        meaning: 'amplitude A',
      },
      {
        name: 'frequency',
        kind: 'frequency',
        optional: false,
        dimension: () => frequencyDimension,
        meaning: 'frequency f, or its period',
      },
    ],
    meaning: '+A for the first half of each period, −A for the second, from `at` for the time `for`',
  },
  build: (use, desk) => {
    desk.add((plant) => {
      const [start, end] = [plant.of(use.at), endOf(use, plant)];
      const amplitude = plant.of(use.setting('amplitude')!);
      const half = 0.5 / plant.of(use.setting('frequency')!);
      const changes: Change[] = [];
      let value = 0;
      for (let edge = 0; start + edge * half < end && edge < mostEdges; edge++) {
        const next = edge % 2 === 0 ? amplitude : -amplitude;
        changes.push({ time: start + edge * half, value: next - value });
        value = next;
      }
      return [...changes, { time: end, value: -value }];
    });
    return undefined;
  },
};
