import { type FirmwareContext, type MeasureResult, measured, unformed } from './measure.js';

/** The least of all steps from one number of a coefficient to the next; the note says where it is, counted from 0. */
export function leastStep(
  { name, values, si }: FirmwareContext,
  step: (before: number, after: number) => number,
): MeasureResult {
  if (values.length < 2) return unformed(`the coefficient '${name}' is one number, which has no neighbour`);
  const steps = values.slice(1).map((after, k) => step(values[k], after));
  const least = steps.reduce((one, other) => Math.min(one, other));
  const at = steps.indexOf(least);
  return measured(si(least), `between '${name}[${at}]' and '${name}[${at + 1}]'`);
}
