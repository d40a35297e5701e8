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

/** A line by its corners. */
export const bound = z
  .array(z.tuple([text('a time'), text('a value')]).describe('a time and a value, such as [0 s, 1 V]'))
  .describe('corners in brackets, such as [[0 s, 1 V], [2 s, 1.1 V]]');

/** Words for a mapping in which each thing has its name. */
export function mappingOf(what: string): string {
  return `a mapping of ${what} by name`;
}

/** Such a mapping that may be left out. */
export function named<T extends z.ZodType>(one: T, what: string) {
  return z.record(z.string(), one).describe(mappingOf(what)).optional();
}
