import { upperBoundOfShare } from '../perturb/binomial_bound.js';
import type { IndependentCount } from './tally.js';

/** What the independent plants alone allow to be said, in words a reviewer can quote. */
export function claimOf(
  { tried, broken, unjudged }: IndependentCount,
  confidence: number,
): string | undefined {
  if (tried === 0) return undefined;
  const failed = broken + unjudged;
  const bound = upperBoundOfShare(failed, tried, confidence);
  const plants = `${tried.toLocaleString('en')} independent plants`;
  const found =
    failed === 0 ? `in ${plants} none failed` : `${failed.toLocaleString('en')} of ${plants} failed`;
  // Where all failed, nothing more can be said of the others.
  if (bound >= 1) return found;
  return `${found}: with ${percent(confidence)} confidence fewer than ${percent(bound)} do`;
}

/** Rounded up to two digits, so that the words never claim more than the bound. */
function percent(share: number): string {
  const exact = share * 100;
  const unit = 10 ** (Math.floor(Math.log10(exact)) - 1);
  return `${Number((Math.ceil(exact / unit - 1e-9) * unit).toPrecision(2))} %`;
}
