import type { FinishedRun, RequirementRun, Verdict } from '../verdict/run.js';
import { counted } from './format_value.js';

/** The verdicts, what blocks the merge first. */
export const verdictKinds = ['broken', 'unjudged', 'met'] as const satisfies readonly Verdict['kind'][];

/** A verdict's sign on a line of text: a bar between two posts that is whole, cut, or not to be seen. */
export const verdictSigns: Readonly<Record<Verdict['kind'], string>> = {
  met: '┣━┫',
  broken: '┣╱┫',
  unjudged: '┣?┫',
};

/** How many requirements of a run have each verdict. */
export function countVerdicts(run: FinishedRun): Record<Verdict['kind'], number> {
  const counts = { met: 0, broken: 0, unjudged: 0 };
  for (const { verdict } of run.specs.flatMap(({ requirements }) => requirements)) counts[verdict.kind]++;
  return counts;
}

/** Whether the merge may go through: every spec could be run, and there are requirements, every one of them met. */
export function mayMerge(run: FinishedRun, faults = 0): boolean {
  const { met, broken, unjudged } = countVerdicts(run);
  return faults === 0 && met > 0 && broken === 0 && unjudged === 0;
}

/** The whole run in a few words: "merge blocked: 2 broken, 1 unjudged, 4 met"; `faults` specs could not be run. */
export function runInWords(run: FinishedRun, faults = 0): string {
  const counts = countVerdicts(run);
  if (mayMerge(run, faults)) return `merge may go through: ${counted(counts.met, 'requirement')} met`;
  const parts = verdictKinds.filter((kind) => counts[kind] > 0).map((kind) => `${counts[kind]} ${kind}`);
  if (faults > 0) parts.unshift(`${counted(faults, 'spec')} could not be run`);
  return `merge blocked: ${parts.join(', ') || 'there are no requirements'}`;
}

/** Requirements in the order in which a reader wants them: broken, unjudged, met; else as in the spec. */
export function blockingFirst(requirements: readonly RequirementRun[]): RequirementRun[] {
  return verdictKinds.flatMap((kind) => requirements.filter(({ verdict }) => verdict.kind === kind));
}
