import { ParameterSpace } from '../../perturb/parameter_space.js';
import type { Spec } from '../../spec/spec.js';
import type { Reference } from './reference.js';

/**
 * The worst plants of a reference that lie within today's bounds, each once, in SI and the order of the spec: with them the
 * latched coefficients are as bad as they were latched, and today's are tried on what was bad for them. Those at nominal or
 * bounds alone are left out, since they are tried anyway.
 */
export function referencePlants(reference: Reference | undefined, spec: Spec): Float64Array[] {
  const { parameters, perturbation } = spec;
  if (!reference || parameters.length === 0) return [];
  const space = new ParameterSpace(parameters, perturbation);
  const found = new Map<string, Float64Array>();
  for (const { plant } of Object.values(reference.requirements)) {
    const values = Float64Array.from(parameters, ({ name }) =>
      Object.hasOwn(plant, name) ? plant[name] : Number.NaN,
    );
    const isWithin = parameters.every(({ low, high }, i) => values[i] >= low && values[i] <= high);
    const isSearched = space.moveOf(values).some((move) => move !== 0 && Math.abs(move) !== 1);
    if (isWithin && isSearched && space.allows(values)) found.set(values.join(), values);
  }
  return [...found.values()];
}
