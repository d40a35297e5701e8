import { z } from 'zod';

/** A slot for text; what is said of it stands in the JSON Schema, and in the error where it is missing or of another shape. */
export function text(expected: string) {
  return z.string().describe(expected);
}

/** A unit that may be left out. */
export const unit = text('a unit such as kg*m^2').optional();

/** An argument list that may be left out. */
export const command = z
  .array(text('an argument'))
  .min(1)
  .describe('a list of arguments, such as [make, -C, firmware]')
  .optional();
