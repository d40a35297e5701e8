import type { Spec } from '../../spec/spec.js';
import type { Comparison, RequirementRun, SinceLatched, Verdict } from '../run.js';
import { hasLost } from './compare.js';
import type { Reference } from './reference.js';
import { waived } from './waive.js';

/** What is known when the verdicts are settled. */
export interface ToSettle {
  spec: Spec;
  reference: Reference | undefined;
  since: SinceLatched;
  /** One for each requirement, but for those about the change itself; none where there is no reference. */
  comparisons: readonly (Comparison | undefined)[];
  /** What changed in how the compilers were called, in words; empty where nothing did or it is not known. */
  compilers: string;
  /** YYYY-MM-DD */
  today: string;
}

/**
 * The requirements with the verdicts that the latched reference leaves them: what holds but lost more headroom than a change
 * may cost has slipped, and what holds for a control law that is not the latched one is unjudged.
 */
export function settleVerdicts(requirements: readonly RequirementRun[], task: ToSettle): RequirementRun[] {
  const { spec, reference, today } = task;
  return requirements.map((requirement, index) => {
    const comparison = task.comparisons[index];
    const verdict = settledVerdict(requirement.verdict, comparison, task);
    const waiver = spec.merge?.waivers?.find((one) => one.requirement === requirement.name);
    const latched = reference?.requirements[requirement.name];
    return {
      ...requirement,
      verdict,
      ...(comparison && { comparison }),
      ...(waiver && { waiver: waived(waiver, verdict, latched, comparison, today) }),
    };
  });
}

function settledVerdict(verdict: Verdict, comparison: Comparison | undefined, task: ToSettle): Verdict {
  if (verdict.kind !== 'met') return verdict;
  const { since, compilers } = task;
  if (since.law.length > 0) return { kind: 'unjudged', why: lawWhy(since.law, compilers) };
  if (comparison === undefined) return verdict;
  if (comparison.rerun === undefined) {
    const why = `the latched coefficients cannot be run under today's spec, so that it is not known what the change costs: ${comparison.why}`;
    return { kind: 'unjudged', why };
  }
  const { lost, maySlip } = comparison;
  const slips = lost === undefined ? hasLost(comparison) : lost > maySlip;
  return slips ? { kind: 'slipped', headroom: verdict.headroom, why: slipWhy(lost, maySlip) } : verdict;
}

function lawWhy(law: readonly string[], compilers: string): string {
  const flags = compilers === '' ? '' : `; of the compilers' versions and flags are ${compilers}`;
  return `${law.join('; ')}${flags}: the spec's model of the law may not be the law any more; hold it against the source, then accept it with pawl latch`;
}

function slipWhy(lost: number | undefined, maySlip: number): string {
  const allowed = `a change may cost ${points(maySlip)}`;
  return lost === undefined
    ? `the firmware lost all of its headroom: there is no number any more; ${allowed}`
    : `the firmware lost ${points(lost, maySlip)} of headroom against the latched reference; ${allowed}`;
}

/** As many digits as it takes to tell it from the other. */
function points(share: number, from?: number): string {
  const shown = (of: number, digits: number): number => Number((of * 100).toPrecision(digits));
  let digits = 3;
  while (from !== undefined && digits < 15 && shown(share, digits) === shown(from, digits)) digits++;
  return `${shown(share, digits)} points`;
}
