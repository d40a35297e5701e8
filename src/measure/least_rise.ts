import { coefficientKey } from './keys.js';
import type { FirmwareMeasure } from './measure.js';
import { leastStep } from './neighbour_steps.js';

/** How much a table of the build rises at least from each number to the next. */
export const leastRise: FirmwareMeasure = {
  description: {
    name: 'least_rise',
    basis: 'firmware',
    keys: [coefficientKey],
    dimension: (of) => of,
    ratio: false,
    better: 'higher',
    window: undefined,
    meaning:
      'min (x(k + 1) − x(k)) over the numbers x(0), x(1) … of the coefficient as they are stored, in its unit: above 0 where the table rises throughout, 0 where two neighbours are equal, negative where it falls somewhere',
  },
  measure: (numbers) => leastStep(numbers, (before, after) => after - before),
};
