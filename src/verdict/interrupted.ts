import type { RequirementRun } from './run.js';

/**
 * A requirement of which only some plants were tried when the work was interrupted: unjudged, whatever they gave, with what they
 * gave in words. Nothing is claimed from them, since nobody searched for worse ones, and their steps were not settled again.
 */
export function interruptedRequirement(requirement: RequirementRun): RequirementRun {
  const { holdsFor, nominal, counts } = requirement;
  const isBroken = nominal.headroom === undefined || nominal.headroom < 0;
  const found =
    holdsFor === 'nominal'
      ? `the nominal plant ${isBroken ? 'breaks it' : 'does not break it'}`
      : counts.broken === 0
        ? 'none of them broke it'
        : `${counts.broken} of them broke it`;
  const plants = counts.tried === 1 ? '1 plant' : `${counts.tried.toLocaleString('en')} plants`;
  const why = `interrupted after ${plants}; ${found}, but it was not judged to the end`;
  return { ...requirement, verdict: { kind: 'unjudged', why }, claim: undefined };
}

/**
 * A requirement that was judged by itself, but not held against the latched reference when the work was interrupted: broken stays
 * broken, and what holds may have slipped.
 */
export function notCompared(requirement: RequirementRun): RequirementRun {
  if (requirement.verdict.kind !== 'met') return requirement;
  const why = 'interrupted before it was held against the latched reference; by itself it is met';
  return { ...requirement, verdict: { kind: 'unjudged', why } };
}
