import type { CoefficientValues } from '../loop/parts.js';
import type { MeasureResult } from '../measure/measure.js';
import { type Plant, type PlantOrigin, plantsToTry } from '../perturb/plants.js';
import type { Requirement, Spec } from '../spec/spec.js';
import { claimOf } from './claim.js';
import { Crew } from './crew.js';
import { type Judgement, judge } from './judge.js';
import { parameterValues } from './parameter_values.js';
import type { JudgedPlant, RequirementRun, SpecRun } from './run.js';
import { verdictOf } from './verdict_of.js';

/** What judging adds to a spec's run. */
export type JudgedSpec = Pick<SpecRun, 'requirements' | 'plants' | 'halvings'>;

/** One plant with the results of all requirements. */
interface TriedPlant {
  plant: Plant;
  results: MeasureResult[];
  judgements: Judgement[];
}

/**
 * Tries every plant of a spec against every requirement.
 * @param workers threads to use; the result does not depend on it.
 * @throws {LoopError} where the build's numbers do not fit the spec.
 */
export async function judgeSpec(
  spec: Spec,
  coefficients: CoefficientValues,
  workers?: number,
): Promise<JudgedSpec> {
  const crew = new Crew(spec, coefficients, workers);
  try {
    const plants = plantsToTry(spec.parameters, spec.perturbation);
    const { tried, halvings } = await tryAll(spec, plants, crew);
    const worst = await confirmedWorst(spec, tried, halvings, crew);
    return {
      requirements: spec.requirements.map((requirement, i) =>
        requirementRun(spec, requirement, i, tried, worst[i]),
      ),
      plants: countByOrigin(plants),
      halvings,
    };
  } finally {
    await crew.dismiss();
  }
}

/** The steps are settled on the nominal plant and the corners; the finest of them then serves every plant. */
async function tryAll(
  spec: Spec,
  plants: Plant[],
  crew: Crew,
): Promise<{ tried: TriedPlant[]; halvings: number }> {
  const settles = ({ origin }: Plant): boolean => origin === 'nominal' || origin === 'corner';
  const settled = await crew.measure(valuesOf(plants.filter(settles)), 0, true);
  const halvings = Math.max(...settled.map((answer) => answer.halvings));
  const others = await crew.measure(valuesOf(plants.filter((plant) => !settles(plant))), halvings, false);
  const tried = plants.map((plant) =>
    triedPlant(spec, plant, (settles(plant) ? settled.shift()! : others.shift()!).results),
  );
  return { tried, halvings };
}

/** The worst plant of each requirement, its steps halved until its results stand; it replaces what was tried. */
async function confirmedWorst(
  spec: Spec,
  tried: TriedPlant[],
  halvings: number,
  crew: Crew,
): Promise<TriedPlant[]> {
  const found = spec.requirements.map((_, i) => tried.indexOf(worstOf(tried, i)));
  const distinct = [...new Set(found)];
  const answers = await crew.measure(valuesOf(distinct.map((at) => tried[at].plant)), halvings, true);
  distinct.forEach((at, i) => {
    tried[at] = triedPlant(spec, tried[at].plant, answers[i].results);
  });
  return found.map((at) => tried[at]);
}

function valuesOf(plants: Plant[]): Float64Array[] {
  return plants.map(({ values }) => values);
}

function triedPlant(spec: Spec, plant: Plant, results: MeasureResult[]): TriedPlant {
  return { plant, results, judgements: results.map((result, i) => judge(spec.requirements[i], result)) };
}

function worstOf(tried: TriedPlant[], index: number): TriedPlant {
  return tried.reduce((worst, one) =>
    one.judgements[index].rank < worst.judgements[index].rank ? one : worst,
  );
}

function requirementRun(
  spec: Spec,
  requirement: Requirement,
  index: number,
  tried: TriedPlant[],
  worst: TriedPlant,
): RequirementRun {
  const judgements = tried.map((one) => one.judgements[index]);
  const count = (kind: Judgement['kind']): number => judgements.filter((one) => one.kind === kind).length;
  const independent = tried
    .filter(({ plant }) => plant.origin === 'independent')
    .map((one) => one.judgements[index]);
  const nominalOnly = requirement.holdsFor === 'nominal';
  const { confidence } = spec.perturbation;
  const { name, place, measure, signals, reason, limit, unit, inDecibels, holdsFor } = requirement;
  return {
    ...{ name, place, measure, signals, reason, limit, unit, inDecibels, holdsFor },
    scenario: requirement.in,
    verdict: verdictOf(requirement, judgements[0], worst.judgements[index], independent, confidence),
    evidence: nominalOnly ? { kind: 'nominal_only' } : { kind: 'tried', plants: tried.length },
    nominal: judgedPlant(spec, tried[0], index),
    worst: judgedPlant(spec, nominalOnly ? tried[0] : worst, index),
    counts: { tried: tried.length, broken: count('broken'), unjudged: count('unjudged') },
    claim: nominalOnly ? undefined : claimOf(independent, confidence),
  };
}

function judgedPlant(spec: Spec, { plant, results, judgements }: TriedPlant, index: number): JudgedPlant {
  const judgement = judgements[index];
  return {
    origin: plant.origin,
    parameters: parameterValues(spec.parameters, plant.values),
    result: results[index],
    headroom: 'headroom' in judgement ? judgement.headroom : undefined,
  };
}

function countByOrigin(plants: readonly Plant[]): Record<PlantOrigin, number> {
  const counts: Record<PlantOrigin, number> = {
    nominal: 0,
    single: 0,
    corner: 0,
    independent: 0,
    edge_biased: 0,
  };
  for (const { origin } of plants) counts[origin]++;
  return counts;
}
