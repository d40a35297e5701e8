import { plantsNeeded, upperBoundOfShare } from '../perturb/binomial_bound.js';
import type { Requirement } from '../spec/spec.js';
import type { Judgement } from './judge.js';
import type { Verdict } from './run.js';
import type { IndependentCount } from './tally.js';

/**
 * The verdict on a requirement from the nominal plant, the worst one, and the independent ones.
 * One plant that breaks the limit is enough for `broken`; one that cannot be judged is enough against `met`.
 */
export function verdictOf(
  requirement: Requirement,
  nominal: Judgement,
  worst: Judgement,
  independent: IndependentCount,
  confidence: number,
): Verdict {
  const { holdsFor } = requirement;
  if (holdsFor === 'nominal') return ofOne(nominal, 'the nominal plant breaks it');
  if (holdsFor === 'all') return ofOne(worst, 'a plant within the bounds breaks it');
  return ofShare(holdsFor, worst, independent, confidence);
}

function ofOne(judgement: Judgement, why: string): Verdict {
  switch (judgement.kind) {
    case 'met':
      return { kind: 'met', headroom: judgement.headroom };
    case 'broken':
      return { kind: 'broken', headroom: judgement.headroom, why };
    case 'unjudged':
      return { kind: 'unjudged', why: judgement.why };
  }
}

function ofShare(
  share: number,
  worst: Judgement,
  independent: IndependentCount,
  confidence: number,
): Verdict {
  const { tried, broken, why: unjudged } = independent;
  if (unjudged !== undefined) return { kind: 'unjudged', why: unjudged };
  const headroom = worst.kind === 'unjudged' ? undefined : worst.headroom;
  const bound = 1 - upperBoundOfShare(broken, tried, confidence);
  if (bound >= share) return { kind: 'met', headroom };
  const needed = plantsNeeded(1 - share, confidence);
  if (broken === 0) {
    const why = `${tried} independent plants are too few for ${share * 100} %: at least ${needed} are needed`;
    return { kind: 'unjudged', why };
  }
  const shown = `only ${(bound * 100).toPrecision(4)} % of plants can be said to meet it, ${share * 100} % are asked for`;
  return { kind: 'broken', headroom, why: shown };
}
