import type { ParameterSpace } from '../perturb/parameter_space.js';
import { type Plant, type PlantOrigin, plantOrigins, plantsToTry } from '../perturb/plants.js';
import { type Effect, effectsOf, screeningWalks } from '../perturb/screening.js';
import type { Ranked } from '../perturb/trials.js';
import type { Spec } from '../spec/spec.js';
import type { Crew } from './crew.js';
import { judge } from './judge.js';
import type { PlantAnswer } from './plant_answers.js';
import { Tally } from './tally.js';

/** What trying the plants of a spec gives; each list has one entry for each requirement. */
export interface TriedSpec {
  tallies: Tally[];
  /** Plants that a search may start from. */
  landmarks: Ranked[][];
  /** How much each parameter matters, by its effect on the rank (headroom as a share of the limit). */
  effects: Effect[][];
  /** How often the first steps were halved. */
  halvings: number;
  plants: Record<Exclude<PlantOrigin, 'searched'>, number>;
}

/** Plants in memory at a time: their number does not grow with what is asked for. */
const chunk = 1024;
const mostLandmarks = 2048;
const walks = 8;
/** Ranks beyond this are of results without a number; they count as this when effects are compared. */
const largestRank = 10;

/**
 * Tries every plant against every requirement. The steps are settled on the nominal plant and the corners; the finest of them
 * then serves every plant.
 * @param saved counterexamples of earlier runs, tried right after the nominal plant.
 * @param trying takes in what is tried; whoever hands it in has it also where the work ends early.
 */
export async function tryPlants(
  spec: Spec,
  space: ParameterSpace,
  crew: Crew,
  saved: readonly Float64Array[],
  trying = new Trying(spec, space, crew),
): Promise<TriedSpec> {
  const plants = plantsToTry(space, spec.perturbation, saved);
  const first: Plant[] = [];
  let next = plants.next();
  while (!next.done && settledOrigins.has(next.value.origin)) {
    first.push(next.value);
    next = plants.next();
  }
  await trying.settle(first);
  while (!next.done) {
    const some: Plant[] = [];
    for (; !next.done && some.length < chunk; next = plants.next()) some.push(next.value);
    trying.fold(some, await crew.measure(valuesOf(some), trying.halvings, false));
  }
  const effects = await trying.screen();
  const { tallies, landmarks, halvings, counts } = trying;
  return { tallies, landmarks, effects, halvings, plants: counts };
}

/** These come first: the few plants on which the steps are settled, and those between them. */
const settledOrigins: ReadonlySet<PlantOrigin> = new Set(['nominal', 'saved', 'single', 'corner']);

/** What was tried so far. */
export class Trying {
  readonly tallies: Tally[];
  readonly landmarks: Ranked[][];
  readonly counts = Object.fromEntries(
    plantOrigins.filter((origin) => origin !== 'searched').map((origin) => [origin, 0]),
  ) as TriedSpec['plants'];
  halvings = 0;

  constructor(
    private readonly spec: Spec,
    private readonly space: ParameterSpace,
    private readonly crew: Crew,
  ) {
    this.tallies = spec.requirements.map(() => new Tally(space.nominal));
    this.landmarks = spec.requirements.map(() => []);
  }

  async settle(plants: Plant[]): Promise<void> {
    const settles = ({ origin }: Plant): boolean => origin === 'nominal' || origin === 'corner';
    const settled = await this.crew.measure(valuesOf(plants.filter(settles)), 0, true);
    this.halvings = Math.max(...settled.map((answer) => answer.halvings));
    const others = valuesOf(plants.filter((plant) => !settles(plant)));
    const rest = await this.crew.measure(others, this.halvings, false);
    this.fold(
      plants,
      plants.map((plant) => (settles(plant) ? settled.shift()! : rest.shift()!)),
    );
  }

  /** Takes in what was measured. @returns the ranks, by requirement and plant. */
  fold(plants: readonly Plant[], answers: readonly PlantAnswer[]): number[][] {
    for (const { origin } of plants) if (origin !== 'searched') this.counts[origin]++;
    return this.spec.requirements.map((requirement, i) =>
      plants.map((plant, at) => {
        const result = answers[at].results[i];
        const judgement = judge(requirement, result);
        this.tallies[i].add({ plant, result, judgement });
        if (this.landmarks[i].length < mostLandmarks) {
          this.landmarks[i].push({ move: this.space.moveOf(plant.values), rank: judgement.rank });
        }
        return judgement.rank;
      }),
    );
  }

  /** Tries the plants of the screening walks. */
  async screen(): Promise<Effect[][]> {
    const { space, spec } = this;
    if (space.size === 0) return spec.requirements.map(() => []);
    const moves = screeningWalks(space, walks, spec.perturbation.seed);
    const all = moves.map((move): Plant => ({ origin: 'screening', values: space.plantAt(move) }));
    const tried = all.filter(({ values }) => space.allows(values));
    const ranks = this.fold(tried, await this.crew.measure(valuesOf(tried), this.halvings, false));
    return ranks.map((own) => {
      const scores = all.map((plant) => scoreOf(own[tried.indexOf(plant)]));
      return effectsOf(moves, scores, space.size);
    });
  }
}

/** A plant that a condition keeps out, or an infinitely good one, has no score. */
function scoreOf(rank: number | undefined): number {
  if (rank === undefined || rank === Number.POSITIVE_INFINITY) return Number.NaN;
  return Math.max(-largestRank, Math.min(largestRank, rank));
}

function valuesOf(plants: readonly Plant[]): Float64Array[] {
  return plants.map(({ values }) => values);
}
