import { coefficientKey } from './keys.js';
import type { FirmwareMeasure } from './measure.js';
import { leastStep } from './neighbour_steps.js';

/** How much a table of the build falls at least from each number to the next. */
export const leastFall: FirmwareMeasure = {
  description: {
    name: 'least_fall',
    basis: 'firmware',
    keys: [coefficientKey],
    dimension: (of) => of,
    ratio: false,
    better: 'higher',
    window: undefined,
    meaning:
      'min (x(k) − x(k + 1)) over the numbers x(0), x(1) … of the coefficient as they are stored, in its unit: above 0 where the table falls throughout, 0 where two neighbours are equal, negative where it rises somewhere',
  },
  measure: (numbers) => leastStep(numbers, (before, after) => before - after),
};
