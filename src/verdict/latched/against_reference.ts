import type { CoefficientValues } from '../../loop/parts.js';
import type { Spec } from '../../spec/spec.js';
import type { JudgedSpec, JudgeOptions } from '../judge_spec.js';
import type { RequirementRun, SinceLatched } from '../run.js';
import { coefficientChanges, coefficientUnits } from './coefficient_changes.js';
import { compareRequirements } from './compare.js';
import { compilerChanges, type LawCode, lawChanges } from './law_changes.js';
import type { Reference } from './reference.js';
import { settleVerdicts } from './settle.js';
import { changesOfRequirements, specChanges } from './spec_parts.js';

/** A judged build, and what it is held against. */
export interface AgainstReference {
  spec: Spec;
  judged: JudgedSpec;
  coefficients: CoefficientValues;
  /** The latched reference, or undefined where there is none. */
  reference: Reference | undefined;
  /** Its path, as shown to people. */
  path: string;
  law: readonly LawCode[];
  /** What the compilers of the image call themselves, with their options. */
  compilers: readonly string[];
  /** The day on which waivers must still count, YYYY-MM-DD. */
  today: string;
}

/** The requirements with their verdicts against the latched reference, and what changed since. */
export async function againstReference(
  task: AgainstReference,
  options: JudgeOptions = {},
): Promise<{ requirements: RequirementRun[]; sinceLatched: SinceLatched }> {
  const { spec, judged, coefficients, reference, path, law, compilers, today } = task;
  const changes = reference ? coefficientChanges(reference, coefficients, coefficientUnits(spec)) : [];
  const sinceLatched: SinceLatched = {
    path,
    reference: reference && { reason: reference.reason, pawl: reference.pawl },
    coefficients: changes,
    spec: reference ? [...specChanges(reference, spec), ...changesOfRequirements(reference, spec)] : [],
    law: lawChanges(reference, law),
  };
  const comparisons = reference
    ? await compareRequirements({ spec, reference, today: coefficients, judged, changes }, options)
    : [];
  const requirements = settleVerdicts(judged.requirements, {
    spec,
    reference,
    since: sinceLatched,
    comparisons,
    compilers: reference?.image ? compilerChanges(reference.image.compilers, compilers) : '',
    today,
  });
  return { requirements, sinceLatched };
}
