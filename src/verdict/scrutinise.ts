import { findWorst } from '../perturb/find_worst.js';
import type { ParameterSpace } from '../perturb/parameter_space.js';
import type { Plant } from '../perturb/plants.js';
import { type Reach, reachAlong } from '../perturb/reach.js';
import { rounderMovesIn } from '../perturb/rounder_moves.js';
import { shrink } from '../perturb/shrink.js';
import { type Ranked, type RankMoves, Trials } from '../perturb/trials.js';
import type { Spec } from '../spec/spec.js';
import type { Crew } from './crew.js';
import { judge } from './judge.js';
import { proofOf } from './prove.js';
import type { Effort, Proof } from './run.js';
import type { Tally, TriedPlant } from './tally.js';

/** What is found about one requirement beyond the plants that every requirement is tried on. */
export interface Scrutiny {
  /** The worst plant, its steps settled. */
  worst: TriedPlant;
  /** A counterexample as near to nominal as it was found to break; undefined where nothing broke. */
  shrunk: TriedPlant | undefined;
  reach: Reach | undefined;
  proof: Proof | undefined;
  effort: Effort;
}

/** Plants that the search may spend on a requirement where the spec does not say. */
export const defaultSearch = 200;
const shrinkBudget = 500;
const reachBudget = 100;
const mostDirections = 4;
const mostConfirmed = 8;

/** What is known of a requirement when its scrutiny begins. */
export interface ScrutinyTask {
  spec: Spec;
  space: ParameterSpace;
  crew: Crew;
  /** Place of the requirement in the spec. */
  index: number;
  tally: Tally;
  landmarks: readonly Ranked[];
  halvings: number;
}

/**
 * Searches for the worst plant where none is known to break the requirement, settles its steps, shrinks a counterexample and
 * finds the reach. Everything follows from the seed and the requirement alone, whatever else runs at the same time.
 */
export async function scrutinise(task: ScrutinyTask): Promise<Scrutiny> {
  const { spec, space, index } = task;
  const { holdsFor } = spec.requirements[index];
  const wholeBox = holdsFor === 'all' && space.size > 0;
  const searched = wholeBox ? await search(task) : 0;
  const proof = wholeBox ? prove(task) : undefined;
  const worst = await confirmWorst(task);
  if (holdsFor === 'nominal' || space.size === 0) {
    const effort = { searched, shrinking: 0, reach: 0 };
    return { worst, shrunk: undefined, reach: undefined, proof, effort };
  }
  const { shrunk, shrinking } = await shrinkOf(task);
  const reach = wholeBox ? await reachOf(task, shrunk) : undefined;
  const effort = { searched, shrinking, reach: reach?.used ?? 0 };
  return { worst, shrunk, reach: reach?.reach, proof, effort };
}

async function search(task: ScrutinyTask): Promise<number> {
  const { spec, space, tally, landmarks, index } = task;
  if (tally.worst[0].judgement.kind !== 'met') return 0;
  // The same on every plant: there is no way down.
  if (landmarks.every((one) => one.rank === landmarks[0].rank)) return 0;
  const rank: RankMoves = (moves) =>
    ranked(task, moves, (tried) => {
      tally.add(tried);
      return tried.judgement.rank;
    });
  const trials = new Trials(rank, spec.perturbation.search ?? defaultSearch, landmarks);
  await findWorst(landmarks, space, trials, spec.perturbation.seed + index);
  return trials.used;
}

/** A proof is tried where nothing tried breaks; a plant that refutes it joins those tried. */
function prove(task: ScrutinyTask): Proof | undefined {
  const { spec, space, crew, tally, index, halvings } = task;
  const requirement = spec.requirements[index];
  if (tally.worst[0].judgement.kind !== 'met') return undefined;
  const tryAt = (values: Float64Array): TriedPlant => {
    const [result] = crew.measureHere(values, halvings, [index]).results;
    return { plant: { origin: 'searched', values }, result, judgement: judge(requirement, result) };
  };
  const breaks = (values: Float64Array): boolean => tryAt(values).judgement.kind === 'broken';
  const found = proofOf(spec, crew.setup.coefficients, requirement, space, breaks);
  if (found?.counterexample) tally.add(tryAt(found.counterexample));
  return found?.proof;
}

/** Ranks moves by measuring this requirement alone; those that a condition keeps out rank as infinitely good. */
async function ranked(
  { spec, space, crew, index, halvings }: ScrutinyTask,
  moves: readonly Float64Array[],
  rankOf: (tried: TriedPlant) => number,
): Promise<number[]> {
  const plants = moves.map((move): Plant => ({ origin: 'searched', values: space.plantAt(move) }));
  const allowed = plants.filter(({ values }) => space.allows(values));
  const answers = await crew.measure(
    allowed.map(({ values }) => values),
    halvings,
    false,
    [index],
  );
  const ranks = new Map(
    allowed.map((plant, i) => {
      const [result] = answers[i].results;
      return [plant, rankOf({ plant, result, judgement: judge(spec.requirements[index], result) })];
    }),
  );
  return plants.map((plant) => ranks.get(plant) ?? Number.POSITIVE_INFINITY);
}

/** Ranks moves for questions about breaks: what cannot be judged is no break. */
function breaks(task: ScrutinyTask): RankMoves {
  return (moves) =>
    ranked(task, moves, ({ judgement }) =>
      judgement.kind === 'unjudged' ? Number.POSITIVE_INFINITY : judgement.rank,
    );
}

/** The worst plant, its steps halved until its result stands; another takes its place where it then is not the worst. */
async function confirmWorst(task: ScrutinyTask): Promise<TriedPlant> {
  const { tally } = task;
  const confirmed = new Set<TriedPlant>();
  for (let round = 0; round < mostConfirmed && !confirmed.has(tally.worst[0]); round++) {
    const [found] = tally.worst;
    const settled = await settledPlant(task, found.plant);
    confirmed.add(settled);
    tally.confirm(found, settled);
  }
  return tally.worst.find((one) => confirmed.has(one)) ?? [...confirmed][0];
}

async function settledPlant(task: ScrutinyTask, plant: Plant): Promise<TriedPlant> {
  const { spec, crew, index, halvings } = task;
  const [answer] = await crew.measure([plant.values], halvings, true, [index]);
  const [result] = answer.results;
  return { plant, result, judgement: judge(spec.requirements[index], result) };
}

async function shrinkOf(task: ScrutinyTask): Promise<{ shrunk: TriedPlant | undefined; shrinking: number }> {
  const { space, tally } = task;
  const broken = [...tally.worst, ...(tally.simplest ? [tally.simplest] : [])]
    .filter(({ judgement }) => judgement.kind === 'broken')
    .map(({ plant, judgement }) => ({ move: space.moveOf(plant.values), rank: judgement.rank }));
  if (broken.length === 0) return { shrunk: undefined, shrinking: 0 };
  const trials = new Trials(breaks(task), shrinkBudget);
  const { move } = await shrink(broken, space, rounderMovesIn(space), trials);
  const shrunk = await settledPlant(task, { origin: 'searched', values: space.plantAt(move) });
  const stands = shrunk.judgement.kind === 'broken';
  return { shrunk: stands ? shrunk : undefined, shrinking: trials.used };
}

async function reachOf(
  task: ScrutinyTask,
  shrunk: TriedPlant | undefined,
): Promise<{ reach: Reach; used: number }> {
  const { space, tally } = task;
  const found = [...(shrunk ? [shrunk] : []), ...tally.worst].map(({ plant }) => space.moveOf(plant.values));
  const directions = found.filter((move) => move.some((x) => x !== 0)).slice(0, mostDirections);
  const trials = new Trials(breaks(task), reachBudget);
  return { reach: await reachAlong(directions, trials), used: trials.used };
}
