import { coefficientKey } from './keys.js';
import { type FirmwareMeasure, measured } from './measure.js';

/** The smallest number of an array of the build. */
export const smallestEntry: FirmwareMeasure = {
  description: {
    name: 'smallest_entry',
    basis: 'firmware',
    keys: [coefficientKey],
    dimension: (of) => of,
    ratio: false,
    better: 'higher',
    window: undefined,
    meaning: 'min of all numbers of the coefficient, in its unit',
  },
  measure: ({ values, si }) => measured(si(values.reduce((least, value) => Math.min(least, value)))),
};
