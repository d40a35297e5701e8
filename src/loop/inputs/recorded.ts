import type { Evaluation } from '../evaluate.js';
import type { Change, Shape } from './shape.js';

/** A signal as it was recorded: straight from point to point, exactly. */
export const recorded: Shape = {
  description: {
    key: 'recorded',
    length: 'none',
    isStep: false,
    settings: [
      {
        name: 'recorded',
        kind: 'points',
        optional: false,
        dimension: (input) => input,
        meaning:
          'times and values in order, `[[0 s, 1 V], …]`, or `{ file: log.csv, columns: [t, u], units: [s, V] }`',
      },
    ],
    meaning:
      'straight from each point to the next, its first time at `at`; from the last point on its value stays; two points of one time are a jump',
  },
  build: (use, desk) => {
    const points = use.points('recorded');
    const start = points[0].time;
    const shifted = (plant: Evaluation, of: (k: number) => number): Change[] =>
      points.map(({ time }, k) => ({ time: plant.of(use.at) + (time - start), value: of(k) }));
    const rateAfter = (k: number): number => {
      const [here, next] = [points[k], points[k + 1]];
      return next && next.time > here.time ? (next.value - here.value) / (next.time - here.time) : 0;
    };
    const rate = desk.constant(`${use.name} recorded rate`, (plant) => shifted(plant, rateAfter));
    return desk.motion(
      `${use.name} recorded`,
      () => rate,
      (plant) => shifted(plant, (k) => points[k].value),
    );
  },
};
