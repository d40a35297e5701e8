import { coefficientKey } from './keys.js';
import { type FirmwareMeasure, measured } from './measure.js';

/** The largest number of an array of the build. */
export const largestEntry: FirmwareMeasure = {
  description: {
    name: 'largest_entry',
    basis: 'firmware',
    keys: [coefficientKey],
    dimension: (of) => of,
    ratio: false,
    better: 'lower',
    window: undefined,
    meaning: 'max of all numbers of the coefficient, in its unit',
  },
  measure: ({ values, si }) => measured(si(values.reduce((most, value) => Math.max(most, value)))),
};
