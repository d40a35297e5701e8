import { ParameterSpace } from '../perturb/parameter_space.js';
import { type PlantOrigin, plantsToTry } from '../perturb/plants.js';
import type { Spec } from '../spec/spec.js';

/** So many plants show the width of the bounds; more would take longer than a reviewer waits for a picture. */
const mostPlants = 40;

/** These come before the independent ones and reach to every side of the bounds. */
const wideOrigins: ReadonlySet<PlantOrigin> = new Set(['nominal', 'single', 'corner', 'spread']);

/** Plants that lie all over the bounds, corners included: a fixed choice, the same for every run of a spec. */
export function bandPlants({ parameters, perturbation }: Spec): Float64Array[] {
  const space = new ParameterSpace(parameters, perturbation);
  const wide: Float64Array[] = [];
  for (const { origin, values } of plantsToTry(space, { ...perturbation, plants: 0 })) {
    if (!wideOrigins.has(origin)) break;
    wide.push(values);
  }
  const every = Math.max(1, wide.length / mostPlants);
  return Array.from({ length: Math.min(wide.length, mostPlants) }, (_, at) => wide[Math.floor(at * every)]);
}
