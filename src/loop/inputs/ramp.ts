import { quotientOf, timeDimension } from '../../spec/dimension.js';
import { endOf, type Shape } from './shape.js';

/** A steady rise, and then the value reached. */
export const ramp: Shape = {
  description: {
    key: 'ramp',
    length: 'optional',
    isStep: false,
    settings: [
      {
        name: 'ramp',
        kind: 'expression',
        optional: false,
        dimension: (input) => quotientOf(input, timeDimension),
        meaning: 'rate of change',
      },
    ],
    meaning: 'the rate from `at` for the time `for` (to the end without it); the value reached stays',
  },
  build: (use, desk) => {
    const rate = desk.constant(`${use.name} ramp rate`, (plant) => [
      { time: plant.of(use.at), value: plant.of(use.setting('ramp')!) },
      { time: endOf(use, plant), value: 0 },
    ]);
    return desk.motion(
      `${use.name} ramp`,
      () => rate,
      () => [],
    );
  },
};
