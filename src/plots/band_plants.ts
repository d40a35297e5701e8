import { ParameterSpace } from '../perturb/parameter_space.js';
import { type PlantOrigin, plantsToTry } from '../perturb/plants.js';
import type { Spec } from '../spec/spec.js';

/** So many plants show the width of the bounds; fewer where one takes long. */
export const bandSizes = [40, 20, 10, 5];

/** As many lie evenly between the bounds as where so many independent ones are asked for. */
const spreadOut = 64;

/** These come before the independent ones and reach to every side of the bounds. */
const wideOrigins: ReadonlySet<PlantOrigin> = new Set(['nominal', 'single', 'corner', 'spread']);

/** Plants that lie all over the bounds, corners included, in an order that is the same for every run of a spec. */
export function widePlants({ parameters, perturbation }: Spec): Float64Array[] {
  const space = new ParameterSpace(parameters, perturbation);
  const wide: Float64Array[] = [];
  for (const { origin, values } of plantsToTry(space, { ...perturbation, plants: spreadOut })) {
    if (!wideOrigins.has(origin)) break;
    wide.push(values);
  }
  return wide;
}

/** At most so many of them, evenly picked. */
export function thinnedPlants(all: readonly Float64Array[], most: number): Float64Array[] {
  const count = Math.min(all.length, most);
  return Array.from({ length: count }, (_, at) => all[Math.floor((at * all.length) / count)]);
}
