import type { JudgedPlant } from '../verdict/run.js';

/** A judged plant as a vector of its parameters' values, SI, in the order of the spec. */
export function valuesOfPlant({ parameters }: JudgedPlant): Float64Array {
  return Float64Array.from(parameters, ({ value }) => value);
}
