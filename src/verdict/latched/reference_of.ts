import type { CoefficientValues } from '../../loop/parts.js';
import type { MeasureResult } from '../../measure/measure.js';
import type { Spec } from '../../spec/spec.js';
import type { CoefficientRead, JudgedPlant, RequirementRun, SpecRun } from '../run.js';
import type { LawCode } from './law_changes.js';
import { type LatchedRequirement, type LatchedResult, type Reference, referenceFormat } from './reference.js';
import { askedOf, partsOfSpec } from './spec_parts.js';
import { isInForce } from './waive.js';

/** What is latched. */
export interface ToLatch {
  spec: Spec;
  run: SpecRun;
  coefficients: CoefficientValues;
  law: readonly LawCode[];
  reason: string;
  pawl: string;
}

/** Why a run may not be latched: one line for people for each requirement; empty where it may. @param today YYYY-MM-DD */
export function latchObstacles(spec: Spec, run: SpecRun, withUnjudged: boolean, today: string): string[] {
  return run.requirements.flatMap(({ name, verdict }) => {
    if (verdict.kind === 'unjudged') {
      return withUnjudged ? [] : [`${name} is unjudged: ${verdict.why}; --with-unjudged latches it so`];
    }
    if (verdict.kind !== 'broken') return [];
    const waiver = spec.merge?.waivers?.find(({ requirement }) => requirement === name);
    if (!waiver) return [`${name} is broken, and no waiver in the spec's merge section names it`];
    return isInForce(waiver, today) ? [] : [`${name} is broken, and its waiver expired on ${waiver.until}`];
  });
}

/** The reference that a judged run makes. */
export function referenceOf({ spec, run, coefficients, law, reason, pawl }: ToLatch): Reference {
  const { provenance } = run;
  return {
    format: referenceFormat,
    pawl,
    loop: spec.loop,
    reason,
    image: provenance ? { sha256: provenance.sha256, compilers: provenance.compilers } : null,
    plants: { ...run.plants },
    seed: spec.perturbation.seed,
    coefficients: Object.fromEntries(
      run.coefficients.map((one) => [one.name, coefficientOf(one, coefficients)]),
    ),
    parameters: Object.fromEntries(
      spec.parameters.map(({ name, nominal, low, high, unit }) => [
        name,
        { nominal, low, high, unit: unit.text },
      ]),
    ),
    parts: partsOfSpec(spec),
    law: Object.fromEntries(law.map(({ name, size, digest }) => [name, { size, digest }])),
    requirements: Object.fromEntries(
      run.requirements.map((requirement, at) => [requirement.name, requirementOf(requirement, at, spec)]),
    ),
  };
}

function coefficientOf(
  { name, unit, coefficient }: CoefficientRead,
  coefficients: CoefficientValues,
): Reference['coefficients'][string] {
  const { path, type, shape, elements } = coefficient;
  const numbers = coefficients.get(name)!;
  const format = 'format' in numbers ? numbers : undefined;
  return {
    at: path,
    type,
    unit: unit?.text ?? null,
    format: format?.format ?? null,
    fractional_bits: format?.fractionalBits ?? null,
    shape: [...shape],
    values: elements.map(({ value }) => value),
    stored: elements.map(({ stored }) => stored),
  };
}

function requirementOf(requirement: RequirementRun, at: number, spec: Spec): LatchedRequirement {
  const { measure, limit, unit, inDecibels, holdsFor, verdict, nominal, worst } = requirement;
  const waiver = spec.merge?.waivers?.find((one) => one.requirement === requirement.name);
  return {
    measure,
    asked: askedOf(spec.requirements[at]),
    limit,
    unit: inDecibels ? 'dB' : unit.text,
    holds_for: holdsFor,
    verdict: verdict.kind === 'slipped' ? 'met' : verdict.kind,
    nominal: resultOf(nominal),
    worst: resultOf(worst),
    plant: Object.fromEntries(worst.parameters.map(({ name, value }) => [name, value])),
    ...(waiver && verdict.kind === 'broken' && { waiver: { reason: waiver.reason, until: waiver.until } }),
  };
}

function resultOf({ result, headroom }: JudgedPlant): LatchedResult {
  return { ...numberOf(result), headroom: headroom ?? null };
}

function numberOf(result: MeasureResult): Pick<LatchedResult, 'value' | 'why'> {
  return result.kind === 'value' ? { value: result.value } : { value: null, why: result.why };
}
