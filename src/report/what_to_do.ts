import type { RequirementRun, SpecRun } from '../verdict/run.js';
import { oneLine, shortened } from './plain_text.js';
import { specAndImage } from './run_again.js';
import { shellWord } from './shell_word.js';
import { blocksMerge } from './verdict_words.js';

/** A coefficient with so much of a loss is named as what to mend. */
const mainShare = 0.5;

/**
 * What the author of a change can do about a requirement that blocks it, with the command that helps: "mend ki, or change the
 * limit or the bounds in the spec and say why; …". Undefined where it blocks nothing.
 */
export function whatToDo(
  requirement: RequirementRun,
  spec: Pick<SpecRun, 'file' | 'provenance'>,
): string | undefined {
  if (!blocksMerge(requirement)) return undefined;
  switch (requirement.verdict.kind) {
    case 'met':
      return undefined;
    case 'broken':
      return `mend ${causeOf(requirement)}, or change the limit or the bounds in the spec and say why; 'pawl replay DIR ${shellWord(oneLine(requirement.name))}' runs that plant again alone, DIR being the folder of the reports`;
    case 'slipped':
      return `win the headroom back with ${causeOf(requirement)}, or accept the loss: 'pawl latch ${specAndImage(spec)} --reason TEXT'`;
    case 'unjudged':
      return 'mend what the reason above names: what cannot be judged does not pass';
  }
}

function causeOf({ comparison }: Pick<RequirementRun, 'comparison'>): string {
  const [first] = comparison?.attribution ?? [];
  return first && first.share >= mainShare ? shortened(oneLine(first.name), 48) : 'the firmware';
}
