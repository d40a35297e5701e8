import type { FinishedRun, RequirementRun, Verdict } from '../verdict/run.js';
import { counted } from './format_value.js';

/** The verdicts, what blocks the merge first. */
export const verdictKinds = [
  'broken',
  'slipped',
  'unjudged',
  'met',
] as const satisfies readonly Verdict['kind'][];

/** A verdict's sign on a line of text: a bar between two posts that is whole, slid down, cut, or not to be seen. */
export const verdictSigns: Readonly<Record<Verdict['kind'], string>> = {
  met: '┣━┫',
  slipped: '┣▁┫',
  broken: '┣╱┫',
  unjudged: '┣?┫',
};

/** How many requirements of a run have each verdict. */
export function countVerdicts(run: FinishedRun): Record<Verdict['kind'], number> {
  const counts = { met: 0, slipped: 0, broken: 0, unjudged: 0 };
  for (const { verdict } of run.specs.flatMap(({ requirements }) => requirements)) counts[verdict.kind]++;
  return counts;
}

/** Whether a requirement stands in the way of the merge: it is not met, and no waiver lets it through. */
export function blocksMerge({ verdict, waiver }: Pick<RequirementRun, 'verdict' | 'waiver'>): boolean {
  return verdict.kind !== 'met' && !(verdict.kind === 'broken' && waiver?.letsThrough);
}

/** Whether the merge may go through: every spec could be run, there are requirements, and none of them blocks. */
export function mayMerge(run: FinishedRun, faults = 0): boolean {
  const requirements = run.specs.flatMap((spec) => spec.requirements);
  return faults === 0 && requirements.length > 0 && !requirements.some(blocksMerge);
}

/** The whole run in a few words: "merge blocked: 2 broken, 1 unjudged, 4 met"; `faults` specs could not be run. */
export function runInWords(run: FinishedRun, faults = 0): string {
  const counts = countVerdicts(run);
  const waived = countWaived(run);
  if (mayMerge(run, faults)) {
    const besides = waived > 0 ? `, ${waived} broken but waived` : '';
    return `merge may go through: ${counted(counts.met, 'requirement')} met${besides}`;
  }
  const parts = verdictKinds
    .filter((kind) => counts[kind] > 0)
    .map((kind) => `${counts[kind]} ${kind}${kind === 'broken' && waived > 0 ? ` (${waived} waived)` : ''}`);
  if (faults > 0) parts.unshift(`${counted(faults, 'spec')} could not be run`);
  return `merge blocked: ${parts.join(', ') || 'there are no requirements'}`;
}

function countWaived({ specs }: FinishedRun): number {
  const all = specs.flatMap(({ requirements }) => requirements);
  return all.filter((one) => one.verdict.kind === 'broken' && !blocksMerge(one)).length;
}

/** Requirements in the order in which a reader wants them: broken, slipped, unjudged, met; else as in the spec. */
export function blockingFirst(requirements: readonly RequirementRun[]): RequirementRun[] {
  return verdictKinds.flatMap((kind) => requirements.filter(({ verdict }) => verdict.kind === kind));
}
