import type { CoefficientValues } from '../loop/expand.js';
import { PlantEvaluator } from '../measure/evaluate_plant.js';
import type { MeasureResult } from '../measure/measure.js';
import { type Plant, type PlantOrigin, plantsToTry } from '../perturb/plants.js';
import type { Requirement, Spec } from '../spec/spec.js';
import { claimOf } from './claim.js';
import { type Judgement, judge } from './judge.js';
import { parameterValues } from './parameter_values.js';
import type { JudgedPlant, RequirementRun, SpecRun } from './run.js';
import { settleSteps } from './settle_steps.js';
import { verdictOf } from './verdict_of.js';

/** What judging adds to a spec's run. */
export type JudgedSpec = Pick<SpecRun, 'requirements' | 'plants' | 'halvings'>;

/** One plant with the results of all requirements. */
export interface TriedPlant {
  plant: Plant;
  results: MeasureResult[];
  judgements: Judgement[];
}

/**
 * Tries every plant of a spec against every requirement.
 * @throws {LoopError} where the build's numbers do not fit the spec.
 */
export function judgeSpec(spec: Spec, coefficients: CoefficientValues): JudgedSpec {
  const evaluator = new PlantEvaluator(spec, coefficients);
  const plants = plantsToTry(spec.parameters, spec.perturbation);
  const settled = new Map<Plant, MeasureResult[]>();
  const settle = (plant: Plant, first: number): number => {
    const evaluate = (halvings: number): MeasureResult[] => evaluator.evaluate(plant.values, halvings);
    const { results, halvings } = settleSteps(spec.requirements, evaluate, first);
    settled.set(plant, results);
    return halvings;
  };
  let halvings = 0;
  for (const plant of plants) {
    if (plant.origin === 'nominal' || plant.origin === 'corner')
      halvings = Math.max(halvings, settle(plant, halvings));
  }
  const tried = plants.map((plant) =>
    triedPlant(spec, plant, settled.get(plant) ?? evaluator.evaluate(plant.values, halvings)),
  );
  const worst = spec.requirements.map((_, i) => {
    const found = worstOf(tried, i);
    if (settled.has(found.plant)) return found;
    settle(found.plant, halvings);
    const confirmed = triedPlant(spec, found.plant, settled.get(found.plant)!);
    tried[tried.indexOf(found)] = confirmed;
    return confirmed;
  });
  return {
    requirements: spec.requirements.map((requirement, i) =>
      requirementRun(spec, requirement, i, tried, worst[i]),
    ),
    plants: countByOrigin(plants),
    halvings,
  };
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
  const judgements = tried.map(({ judgements }) => judgements[index]);
  const count = (kind: Judgement['kind']): number => judgements.filter((one) => one.kind === kind).length;
  const independent = tried
    .filter(({ plant }) => plant.origin === 'independent')
    .map((one) => one.judgements[index]);
  const nominalOnly = requirement.holdsFor === 'nominal';
  const judged = (one: TriedPlant): JudgedPlant => ({
    origin: one.plant.origin,
    parameters: parameterValues(spec.parameters, one.plant.values),
    result: one.results[index],
    headroom: 'headroom' in one.judgements[index] ? one.judgements[index].headroom : undefined,
  });
  return {
    name: requirement.name,
    place: requirement.place,
    measure: requirement.measure,
    signals: requirement.signals,
    scenario: requirement.in,
    reason: requirement.reason,
    limit: requirement.limit,
    unit: requirement.unit,
    inDecibels: requirement.inDecibels,
    holdsFor: requirement.holdsFor,
    verdict: verdictOf(
      requirement,
      judgements[0],
      worst.judgements[index],
      independent,
      spec.perturbation.confidence,
    ),
    evidence: nominalOnly ? { kind: 'nominal_only' } : { kind: 'tried', plants: tried.length },
    nominal: judged(tried[0]),
    worst: judged(nominalOnly ? tried[0] : worst),
    counts: { tried: tried.length, broken: count('broken'), unjudged: count('unjudged') },
    claim: nominalOnly ? undefined : claimOf(independent, spec.perturbation.confidence),
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
