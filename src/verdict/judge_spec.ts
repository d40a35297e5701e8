import type { CoefficientValues } from '../loop/parts.js';
import { measureNamed } from '../measure/index.js';
import type { LatchedNumbers } from '../measure/measure.js';
import { ParameterSpace } from '../perturb/parameter_space.js';
import type { Effect } from '../perturb/screening.js';
import type { Requirement, Spec } from '../spec/spec.js';
import { claimOf } from './claim.js';
import { Crew, type Watch } from './crew.js';
import { idleRequirement } from './idle_requirement.js';
import { interruptedRequirement } from './interrupted.js';
import { parameterValues } from './parameter_values.js';
import type { PlantSetup } from './plant_answers.js';
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
import { Trying, tryPlants } from './try_plants.js';
import { verdictOf } from './verdict_of.js';

/** What judging adds to a spec's run. */
export type JudgedSpec = Pick<
  SpecRun,
  'requirements' | 'plants' | 'halvings' | 'effort' | 'triedSeconds' | 'partial'
>;

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
  /** The same for the run of the latched coefficients. */
  latchedCrew?: (setup: PlantSetup) => Crew;
}

/**
 * Tries every plant of a spec against every requirement, and scrutinises each requirement. Where it is interrupted after the
 * first plants, what these gave is `partial`, with every requirement unjudged; before them the reason is thrown.
 * @throws {LoopError} where the build's numbers do not fit the spec.
 */
export async function judgeSpec(
  spec: Spec,
  coefficients: CoefficientValues,
  options: JudgeOptions = {},
): Promise<JudgedSpec> {
  const { workers, saved = [], latched, watch } = options;
  const crew = options.crew ?? new Crew({ spec, coefficients, latched }, workers, watch);
  const space = new ParameterSpace(spec.parameters, spec.perturbation);
  const trying = new Trying(spec, space, crew);
  try {
    const started = performance.now();
    const tried = await tryPlants(spec, space, crew, saved, trying);
    const { tallies, landmarks, effects, halvings, plants } = tried;
    const triedSeconds = (performance.now() - started) / 1000;
    const scrutinies = await Promise.all(
      spec.requirements.map((_, index) =>
        scrutinise({
          ...{ spec, space, crew, index, halvings },
          ...{ tally: tallies[index], landmarks: landmarks[index] },
        }),
      ),
    );
    const still = crew.stayStill(Float64Array.from(space.nominal));
    return {
      requirements: spec.requirements.map((one, i) =>
        withWarning(
          requirementRun(spec, i, tallies[i], scrutinies[i], effectsInNames(spec, space, effects[i])),
          one,
          still[i],
        ),
      ),
      plants,
      halvings,
      effort: sumOf(scrutinies.map(({ effort }) => effort)),
      triedSeconds,
    };
  } catch (error) {
    if (!watch?.signal?.aborted || !trying.tallies[0]?.nominal) throw error;
    return interruptedSpec(spec, trying);
  } finally {
    await crew.dismiss();
  }
}

/** A requirement that holds, with the reason why it guards nothing where it does not: its worst plant tells that of all. */
function withWarning(run: RequirementRun, requirement: Requirement, still: boolean): RequirementRun {
  if (run.verdict.kind !== 'met') return run;
  const { description } = measureNamed(requirement.measure);
  const guardsNothing = idleRequirement(requirement, description, [run.worst.result], still);
  return guardsNothing === undefined ? run : { ...run, guardsNothing };
}

function interruptedSpec(spec: Spec, { tallies, counts, halvings }: Trying): JudgedSpec {
  const effort = { searched: 0, shrinking: 0, reach: 0 };
  const requirements = tallies.map((tally, index) => {
    const scrutiny = { worst: tally.worst[0], shrunk: undefined, reach: undefined, proof: undefined, effort };
    return interruptedRequirement(requirementRun(spec, index, tally, scrutiny, []));
  });
  return { requirements, plants: counts, halvings, effort, partial: true };
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
    ...(requirement.statement && { statement: requirement.statement }),
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
