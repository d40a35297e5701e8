import type { Requirement } from './spec.js';

/** The signals at which a requirement opens the loop, in the order written; none where it is no measure of the loop. */
export function openedAt({
  signals,
  atSeveral,
}: Pick<Requirement, 'signals' | 'atSeveral'>): readonly string[] {
  return atSeveral ?? (signals.at === undefined ? [] : [signals.at]);
}
