import { PlantEvaluator } from '../../src/measure/evaluate_plant.js';
import type { MeasureResult } from '../../src/measure/measure.js';
import { specOf } from './spec_of.js';

/** The results of a spec's requirements on its nominal plant, by name. */
export function resultsOf(
  sections: string,
  { halvings = 0, coefficients = new Map<string, readonly number[]>() } = {},
): Record<string, MeasureResult> {
  const spec = specOf(sections);
  const nominal = Float64Array.from(spec.parameters, (parameter) => parameter.nominal);
  const results = new PlantEvaluator(spec, coefficients).evaluate(nominal, halvings);
  return Object.fromEntries(spec.requirements.map(({ name }, i) => [name, results[i]]));
}

/**
 * The numbers that the measures of a spec give on its nominal plant, by requirement's name.
 * @throws Error where one gives no number.
 */
export function measured(sections: string, options = {}): Record<string, number> {
  const entries = Object.entries(resultsOf(sections, options)).map(([name, result]): [string, number] => {
    if (result.kind !== 'value') throw new Error(`${name}: ${JSON.stringify(result)}`);
    return [name, result.value];
  });
  return Object.fromEntries(entries);
}
