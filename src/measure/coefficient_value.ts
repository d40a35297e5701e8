import { coefficientKey } from './keys.js';
import { type FirmwareMeasure, measured, unformed } from './measure.js';

/** A number of the build as it is. */
export const coefficientValue: FirmwareMeasure = {
  description: {
    name: 'coefficient_value',
    basis: 'firmware',
    keys: [coefficientKey],
    dimension: (of) => of,
    ratio: false,
    better: 'lower',
    window: undefined,
    meaning:
      'the number that the build holds, with its scale and offset, in the unit of the coefficient; a plain number where the spec gives it no unit',
  },
  measure: ({ name, values, si }) =>
    values.length === 1
      ? measured(si(values[0]))
      : unformed(
          `the coefficient '${name}' is an array of ${values.length}; name one of its numbers in the firmware section, or ask for its largest_entry or smallest_entry`,
        ),
};
