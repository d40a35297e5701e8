import fc from 'fast-check';
import { uniformFloat64 } from 'pure-rand/distribution/uniformFloat64';
import { uniformInt } from 'pure-rand/distribution/uniformInt';
import { xoroshiro128plus } from 'pure-rand/generator/xoroshiro128plus';
import { LoopError } from '../loop/loop.js';
import type { Perturbation } from '../spec/spec.js';
import type { ParameterSpace } from './parameter_space.js';
import { sobolDimensions, sobolPoints } from './sobol_points.js';

/** Every reason to try a plant, in the order in which they are tried. */
export const plantOrigins = [
  'nominal',
  /** A counterexample of an earlier run. */
  'saved',
  /** One parameter at one of its bounds. */
  'single',
  'corner',
  /** A point of a low-discrepancy sequence. */
  'spread',
  /** An independent draw: these alone carry a statistical statement. */
  'independent',
  'edge_biased',
  /** Moved one parameter at a time, to see which matter. */
  'screening',
  /** Found by the search for the worst. */
  'searched',
] as const;

/** Why a plant is tried. */
export type PlantOrigin = (typeof plantOrigins)[number];

/** One choice of a value (SI) for every parameter, in the order of the spec. */
export interface Plant {
  origin: PlantOrigin;
  values: Float64Array;
}

/** Up to so many parameters every corner of the box is tried; beyond, a seeded choice of as many corners. */
const parametersWithAllCorners = 10;
/** Of plants of a low-discrepancy sequence, and of edge-biased ones, as many as of independent ones, and so many at most. */
const mostExtras = 64;
const mostDraws = 10_000;

/**
 * The plants to try, one after another in a fixed order: nominal, saved ones, single extremes, corners, a low-discrepancy
 * sequence, independent draws, and edge-biased extras. Those that a condition keeps out are passed over; of the independent
 * ones exactly as many as asked for are drawn, from the stated distributions under the conditions.
 * @param saved counterexamples of earlier runs.
 * @throws {LoopError} when the conditions leave next to no room for independent draws.
 */
export function* plantsToTry(
  space: ParameterSpace,
  { seed, plants, onlyWhere }: Perturbation,
  saved: readonly Float64Array[] = [],
): Generator<Plant> {
  yield { origin: 'nominal', values: space.nominal.slice() };
  if (space.size === 0) return;
  yield* allowed(space, 'saved', savedPlants(space, saved));
  yield* allowed(space, 'single', singleExtremes(space));
  yield* allowed(space, 'corner', corners(space, seed));
  const extras = Math.min(mostExtras, plants);
  yield* allowed(space, 'spread', spreadOut(space, extras, seed));
  yield* independentPlants(space, plants, seed, onlyWhere?.[0]?.place);
  yield* allowed(space, 'edge_biased', edgeBiased(space, extras, seed));
}

function* allowed(space: ParameterSpace, origin: PlantOrigin, all: Iterable<Float64Array>): Generator<Plant> {
  for (const values of all) if (space.allows(values)) yield { origin, values };
}

/** The saved plants as the spec now has them: derived parameters follow, and of a list only its values count. */
function* savedPlants(space: ParameterSpace, saved: readonly Float64Array[]): Generator<Float64Array> {
  for (const values of saved) {
    const isListed = space.parameters.every(
      ({ distribution }, i) => distribution?.kind !== 'values' || distribution.values.includes(values[i]),
    );
    if (isListed) yield space.completed(values.slice());
  }
}

function* singleExtremes(space: ParameterSpace): Generator<Float64Array> {
  for (let k = 0; k < space.size; k++) {
    for (const end of [space.least[k], space.most[k]]) {
      if (end !== 0) yield space.plantAt(new Float64Array(space.size).with(k, end));
    }
  }
}

function* corners(space: ParameterSpace, seed: number): Generator<Float64Array> {
  const corner = (isHigh: (k: number) => boolean): Float64Array =>
    space.plantAt(Float64Array.from(space.free, (_, k) => (isHigh(k) ? space.most[k] : space.least[k])));
  const count = 2 ** Math.min(space.size, parametersWithAllCorners);
  const generator = xoroshiro128plus(seed ^ 0x5bf03635);
  for (let code = 0; code < count; code++) {
    yield space.size <= parametersWithAllCorners
      ? corner((k) => ((code >> k) & 1) === 1)
      : corner(() => uniformInt(generator, 0, 1) === 1);
  }
}

/** The low-discrepancy points lie evenly between the bounds; with more parameters than it has dimensions the rest is drawn. */
function* spreadOut(space: ParameterSpace, count: number, seed: number): Generator<Float64Array> {
  const points = sobolPoints(Math.min(space.size, sobolDimensions));
  const generator = xoroshiro128plus(seed ^ 0x2545f491);
  points.next();
  for (let done = 0; done < count; done++) {
    const point = points.next().value;
    yield space.plantAt(
      Float64Array.from(space.free, (_, k) => {
        const share = k < point.length ? point[k] : uniformFloat64(generator);
        return space.least[k] + share * (space.most[k] - space.least[k]);
      }),
    );
  }
}

function* independentPlants(
  space: ParameterSpace,
  count: number,
  seed: number,
  place: LoopError['place'] | undefined,
): Generator<Plant> {
  const generator = xoroshiro128plus(seed);
  for (let done = 0; done < count; done++) {
    let values: Float64Array;
    let draws = 0;
    do {
      if (++draws > mostDraws) {
        throw new LoopError(
          `the conditions leave next to no room: none of ${mostDraws} plants drawn fulfils them; expected wider bounds or weaker conditions`,
          place!,
        );
      }
      values = space.drawnAt(space.free.map(() => uniformFloat64(generator)));
    } while (!space.allows(values));
    yield { origin: 'independent', values };
  }
}

/** Plants as fast-check's bias to edges finds them: bounds, values next to them, and small moves from nominal. */
function edgeBiased(space: ParameterSpace, count: number, seed: number): Float64Array[] {
  const found: Float64Array[] = [];
  const moves = fc.tuple(
    ...space.free.map((_, k) => fc.double({ min: space.least[k], max: space.most[k], noNaN: true })),
  );
  const collect = fc.property(moves, (drawn) => {
    found.push(space.plantAt(drawn));
  });
  fc.assert(collect, { seed, numRuns: count, endOnFailure: true });
  return found;
}
