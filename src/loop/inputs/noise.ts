import { timeDimension } from '../../spec/dimension.js';
import { standardNormal } from '../random_draws.js';
import { endOf, type Shape } from './shape.js';

/** A random value that is drawn anew from time to time: the same draws for every plant. */
export const noise: Shape = {
  description: {
    key: 'noise',
    length: 'optional',
    isStep: false,
    settings: [
      {
        name: 'deviation',
        kind: 'expression',
        optional: false,
        dimension: (input) => input,
        meaning: 'standard deviation σ',
      },
      {
        name: 'every',
        kind: 'expression',
        optional: false,
        dimension: () => timeDimension,
        meaning: 'time from one draw to the next; its spectrum is flat up to about 0.4 / every',
      },
    ],
    meaning:
      'independent Gaussian values of deviation σ, each held for `every`, from `at` for the time `for`; seeded',
  },
  build: (use, desk) => {
    desk.add((plant) => {
      const [start, end, every] = [plant.of(use.at), endOf(use, plant), plant.of(use.setting('every')!)];
      const count = Math.max(0, Math.ceil((end - start) / every - 1e-9));
      const draws = standardNormal(use.seed, 0, count);
      const deviation = plant.of(use.setting('deviation')!);
      const changes = Array.from(draws, (draw, k) => ({
        time: start + k * every,
        value: deviation * (draw - (k > 0 ? draws[k - 1] : 0)),
      }));
      return count > 0 ? [...changes, { time: end, value: -deviation * draws[count - 1] }] : [];
    });
    return undefined;
  },
};
