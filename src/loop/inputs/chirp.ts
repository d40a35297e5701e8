import { frequencyDimension } from '../../spec/dimension.js';
import { endOf, type Shape } from './shape.js';

/** A vibration whose frequency changes steadily. */
export const chirp: Shape = {
  description: {
    key: 'chirp',
    length: 'needed',
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
        name: 'first',
        kind: 'frequency',
        optional: false,
        dimension: () => frequencyDimension,
        meaning: 'frequency at the start',
      },
      {
        name: 'last',
        kind: 'frequency',
        optional: false,
        dimension: () => frequencyDimension,
        meaning: 'frequency at the end',
      },
    ],
    meaning: 'A·sin(φ), with φ from 0 and φ′/2π going steadily from `first` to `last` within the time `for`',
  },
  build: (use, desk) => {
    const during =
      (value: (plant: Parameters<typeof endOf>[1]) => number) => (plant: Parameters<typeof endOf>[1]) => [
        { time: plant.of(use.at), value: value(plant) },
        { time: endOf(use, plant), value: 0 },
      ];
    const [first, last] = [use.setting('first')!, use.setting('last')!];
    const gain = desk.constant(
      `${use.name} chirp amplitude`,
      during((plant) => plant.of(use.setting('amplitude')!)),
    );
    const bend = desk.constant(
      `${use.name} chirp rate`,
      during((plant) => (2 * Math.PI * (plant.of(last) - plant.of(first))) / plant.of(use.lasts!)),
    );
    const speed = desk.motion(
      `${use.name} chirp speed`,
      () => bend,
      during((plant) => 2 * Math.PI * plant.of(first)),
    );
    const angle = desk.motion(
      `${use.name} chirp angle`,
      () => speed,
      during(() => 0),
    );
    return desk.multiply(gain, desk.sine(angle));
  },
};
