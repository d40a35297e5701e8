import type { Waiver } from '../../spec/spec.js';
import type { Comparison, Verdict, WaivedRequirement } from '../run.js';
import { hasLost } from './compare.js';
import type { LatchedRequirement } from './reference.js';

/** Whether a waiver still counts on a day. @param today YYYY-MM-DD */
export function isInForce({ until }: Waiver, today: string): boolean {
  return today <= until;
}

/**
 * Whether a waiver lets a broken requirement through: up to and with its last day, where the requirement was latched as
 * broken, and as long as it got no worse than a change may cost.
 *
 * @param today YYYY-MM-DD
 */
export function waived(
  waiver: Waiver,
  verdict: Verdict,
  latched: LatchedRequirement | undefined,
  comparison: Comparison | undefined,
  today: string,
): WaivedRequirement {
  const { reason, until } = waiver;
  const why = whyNot(waiver, verdict, latched, comparison, today);
  return { reason, until, letsThrough: why === undefined, ...(why !== undefined && { why }) };
}

function whyNot(
  waiver: Waiver,
  verdict: Verdict,
  latched: LatchedRequirement | undefined,
  comparison: Comparison | undefined,
  today: string,
): string | undefined {
  if (verdict.kind !== 'broken') return `it is ${verdict.kind}, and a waiver is for what is broken`;
  if (!isInForce(waiver, today)) return `it expired on ${waiver.until}`;
  if (latched?.verdict !== 'broken') return 'the latched reference does not hold it as broken';
  if (comparison === undefined || comparison.rerun === undefined)
    return 'it cannot be compared with the latched reference';
  const worse = comparison.lost === undefined ? hasLost(comparison) : comparison.lost > comparison.maySlip;
  return worse ? 'it got worse than it was latched' : undefined;
}
