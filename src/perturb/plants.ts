import fc from 'fast-check';
import { uniformFloat64 } from 'pure-rand/distribution/uniformFloat64';
import { uniformInt } from 'pure-rand/distribution/uniformInt';
import { xoroshiro128plus } from 'pure-rand/generator/xoroshiro128plus';
import type { ParameterDefinition, Perturbation } from '../spec/spec.js';

/** Why a plant is tried. Only `independent` ones carry a statistical statement. */
export type PlantOrigin = 'nominal' | 'single' | 'corner' | 'independent' | 'edge_biased';

/** One choice of a value (SI) for every parameter, in the order of the spec. */
export interface Plant {
  origin: PlantOrigin;
  values: Float64Array;
}

/** Up to so many parameters every corner of the box is tried; beyond, a seeded choice of as many corners. */
const parametersWithAllCorners = 10;
const edgeBiasedPlants = 64;

/** The plants to try, in a fixed order: nominal, single extremes, corners, independent draws, and edge-biased extras. */
export function plantsToTry(parameters: readonly ParameterDefinition[], perturbation: Perturbation): Plant[] {
  const uncertain = parameters.map(({ low, high }) => low < high);
  const nominal = Float64Array.from(parameters, (parameter) => parameter.nominal);
  const plants: Plant[] = [{ origin: 'nominal', values: nominal }];
  if (!uncertain.includes(true)) return plants;
  return [
    ...plants,
    ...singleExtremes(parameters, nominal),
    ...corners(parameters, perturbation.seed),
    ...independentPlants(parameters, perturbation),
    ...edgeBiased(parameters, perturbation.seed),
  ];
}

function singleExtremes(parameters: readonly ParameterDefinition[], nominal: Float64Array): Plant[] {
  return parameters.flatMap(({ low, high }, i) =>
    [low, high]
      .filter((bound) => bound !== nominal[i])
      .map((bound) => ({ origin: 'single' as const, values: nominal.with(i, bound) })),
  );
}

function corners(parameters: readonly ParameterDefinition[], seed: number): Plant[] {
  const free = parameters.flatMap(({ low, high }, i) => (low < high ? [i] : []));
  const corner = (isHigh: (k: number) => boolean): Plant => {
    const values = Float64Array.from(parameters, (parameter) => parameter.low);
    free.forEach((i, k) => {
      if (isHigh(k)) values[i] = parameters[i].high;
    });
    return { origin: 'corner', values };
  };
  const count = 2 ** Math.min(free.length, parametersWithAllCorners);
  if (free.length <= parametersWithAllCorners) {
    return Array.from({ length: count }, (_, code) => corner((k) => ((code >> k) & 1) === 1));
  }
  const generator = xoroshiro128plus(seed ^ 0x5bf03635);
  return Array.from({ length: count }, () => corner(() => uniformInt(generator, 0, 1) === 1));
}

/** Draws from the stated distribution (uniform between the bounds), one plant after another. */
function independentPlants(
  parameters: readonly ParameterDefinition[],
  { plants, seed }: Perturbation,
): Plant[] {
  const generator = xoroshiro128plus(seed);
  return Array.from({ length: plants }, () => ({
    origin: 'independent',
    values: Float64Array.from(parameters, ({ low, high }) => low + (high - low) * uniformFloat64(generator)),
  }));
}

/** Plants as fast-check's bias to edges finds them: bounds, values next to them, and small numbers. */
function edgeBiased(parameters: readonly ParameterDefinition[], seed: number): Plant[] {
  const found: Plant[] = [];
  const values = fc.tuple(
    ...parameters.map(({ low, high }) => fc.double({ min: low, max: high, noNaN: true })),
  );
  const collect = fc.property(values, (drawn) => {
    found.push({ origin: 'edge_biased', values: Float64Array.from(drawn, (value) => value + 0) });
  });
  fc.assert(collect, { seed, numRuns: edgeBiasedPlants, endOnFailure: true });
  return found;
}
