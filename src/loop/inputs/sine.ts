import { frequencyDimension, plainNumber } from '../../spec/dimension.js';
import { endOf, type Shape } from './shape.js';

/** A vibration, made by two states that turn in a circle: exact between instants. */
export const sine: Shape = {
  description: {
    key: 'sine',
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
      {
        name: 'phase',
        kind: 'expression',
        optional: true,
        dimension: () => plainNumber,
        meaning: 'angle φ at the start; 0 by default',
      },
    ],
    meaning: 'A·sin(2π·f·(t − at) + φ) from `at` for the time `for`',
  },
  build: (use, desk) => {
    const speed = desk.multiply(desk.number(2 * Math.PI), use.setting('frequency')!);
    const part = (of: (angle: number) => number) => (plant: Parameters<typeof endOf>[1]) => {
      const phase = use.setting('phase');
      const value = plant.of(use.setting('amplitude')!) * of(phase ? plant.of(phase) : 0);
      return [
        { time: plant.of(use.at), value },
        { time: endOf(use, plant), value: 0 },
      ];
    };
    let height = desk.number(0);
    const across = desk.motion(
      `${use.name} cosine`,
      () => desk.multiply(desk.multiply(desk.number(-1), speed), height),
      part(Math.cos),
    );
    height = desk.motion(`${use.name} sine`, () => desk.multiply(speed, across), part(Math.sin));
    return height;
  },
};
