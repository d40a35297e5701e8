import { LoopError } from '../loop/loop.js';
import type { CoefficientValues } from '../loop/parts.js';
import { isLike, withLatched } from '../verdict/latched/coefficient_changes.js';
import type { Reference } from '../verdict/latched/reference.js';
import type { SinceLatched } from '../verdict/run.js';

/** Today's numbers, and the latched ones under today's spec where they differ from them. */
export interface NumbersToDraw {
  today: CoefficientValues;
  latched: CoefficientValues | undefined;
}

/** The latched reference of a judged spec, and what changed since. */
export interface LatchedToDraw {
  reference: Reference | undefined;
  since: SinceLatched | undefined;
}

/** What is drawn with today's coefficients is drawn with the latched ones too, where some of them are others. */
export function numbersToDraw(today: CoefficientValues, { reference, since }: LatchedToDraw): NumbersToDraw {
  const changes = since?.coefficients.filter((change) => isLike(change) && change.today !== undefined) ?? [];
  const differ = reference !== undefined && changes.length > 0;
  return { today, latched: differ ? withLatched(today, reference, changes) : undefined };
}

/** What is drawn of latched numbers; undefined where they do not fit today's spec, for which they were not written. */
export function whereItFits<T>(draw: () => T): T | undefined {
  try {
    return draw();
  } catch (error) {
    if (error instanceof LoopError) return undefined;
    throw error;
  }
}
