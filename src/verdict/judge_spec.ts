import type { CoefficientValues } from '../loop/parts.js';
import type { LatchedNumbers } from '../measure/measure.js';
import { ParameterSpace } from '../perturb/parameter_space.js';
import type { Effect } from '../perturb/screening.js';
import type { Spec } from '../spec/spec.js';
import { claimOf } from './claim.js';
import { Crew, type Watch } from './crew.js';
import { parameterValues } from './parameter_values.js';
import type {
  Effort,
  Evidence,
  JudgedPlant,
  ParameterEffect,
  Proof,
  RequirementRun,
  SpecRun,
} from './run.js';
import { type Scrutiny, scrutinise } from './scrutinise.js';
import type { Tally, TriedPlant } from './tally.js';
import { tryPlants } from './try_plants.js';
import { verdictOf } from './verdict_of.js';

/** What judging adds to a spec's run. */
export type JudgedSpec = Pick<SpecRun, 'requirements' | 'plants' | 'halvings' | 'effort' | 'triedSeconds'>;

/** How a spec is judged; the result does not depend on the number of workers. */
export interface JudgeOptions {
  /** Threads to use; all cores where not given. */
  workers?: number;
  /** Counterexamples of earlier runs (SI, in the order of the parameters), tried first. */
  saved?: readonly Float64Array[];
  /** What coefficients are compared with, where a requirement asks for their change. */
  latched?: LatchedNumbers;
  /** Who wants to know how far it is, or to stop it. */
  watch?: Watch;
  /** Who measures, where that is not to be this machine alone; `workers` and `watch` are then its own. */
  crew?: Crew;
}

/**
 * Tries every plant of a spec against every requirement, and scrutinises each requirement.
 * @throws {LoopError} where the build's numbers do not fit the spec.
 */
export async function judgeSpec(
  spec: Spec,
  coefficients: CoefficientValues,
  options: JudgeOptions = {},
): Promise<JudgedSpec> {
  const { workers, saved = [], latched, watch } = options;
  const crew = options.crew ?? new Crew({ spec, coefficients, latched }, workers, watch);
  try {
    const space = new ParameterSpace(spec.parameters, spec.perturbation);
    const started = performance.now();
    const { tallies, landmarks, effects, halvings, plants } = await tryPlants(spec, space, crew, saved);
    const triedSeconds = (performance.now() - started) / 1000;
    const scrutinies = await Promise.all(
      spec.requirements.map((_, index) =>
        scrutinise({
          ...{ spec, space, crew, index, halvings },
          ...{ tally: tallies[index], landmarks: landmarks[index] },
        }),
      ),
    );
    return {
      requirements: spec.requirements.map((_, i) =>
        requirementRun(spec, i, tallies[i], scrutinies[i], effectsInNames(spec, space, effects[i])),
      ),
      plants,
      halvings,
      effort: sumOf(scrutinies.map(({ effort }) => effort)),
      triedSeconds,
    };
  } finally {
    await crew.dismiss();
  }
}

function requirementRun(
  spec: Spec,
  index: number,
  { nominal, counts, independent }: Tally,
  { worst, shrunk, reach, proof, effort }: Scrutiny,
  effects: ParameterEffect[],
): RequirementRun {
  const requirement = spec.requirements[index];
  const nominalOnly = requirement.holdsFor === 'nominal';
  const { confidence } = spec.perturbation;
  const { name, place, measure, signals, atSeveral, reason, limit, unit, inDecibels, holdsFor } = requirement;
  const judgedAt = nominalOnly ? nominal! : worst;
  return {
    ...{ name, place, measure, signals, reason, limit, unit, inDecibels, holdsFor },
    ...(atSeveral && { atSeveral }),
    scenario: requirement.in,
    verdict: verdictOf(requirement, nominal!.judgement, worst.judgement, independent, confidence),
    evidence: evidenceOf(nominalOnly, proof, counts.tried),
    nominal: judgedPlant(spec, nominal!),
    worst: judgedPlant(spec, judgedAt),
    counts: { ...counts },
    claim: nominalOnly ? undefined : claimOf(independent, confidence),
    shrunk: shrunk && judgedPlant(spec, shrunk),
    reach,
    proof,
    effects,
    effort,
  };
}

function evidenceOf(nominalOnly: boolean, proof: Proof | undefined, plants: number): Evidence {
  if (nominalOnly) return { kind: 'nominal_only' };
  return { kind: proof?.kind === 'proved' ? 'proved' : 'tried', plants };
}

function judgedPlant(spec: Spec, { plant, result, judgement }: TriedPlant): JudgedPlant {
  return {
    origin: plant.origin,
    parameters: parameterValues(spec.parameters, plant.values),
    result,
    headroom: 'headroom' in judgement ? judgement.headroom : undefined,
  };
}

function effectsInNames(
  { parameters }: Spec,
  { free }: ParameterSpace,
  effects: readonly Effect[],
): ParameterEffect[] {
  return effects.map(({ parameter, size, spread }) => ({
    name: parameters[free[parameter]].name,
    headroom: size,
    spread,
  }));
}

function sumOf(efforts: readonly Effort[]): Effort {
  const total = (key: keyof Effort): number => efforts.reduce((sum, effort) => sum + effort[key], 0);
  return { searched: total('searched'), shrinking: total('shrinking'), reach: total('reach') };
}
