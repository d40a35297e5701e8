import type { Requirement } from '../../src/spec/spec.js';
import type { Judgement } from '../../src/verdict/judge.js';
import type { IndependentCount } from '../../src/verdict/tally.js';

const place = { file: 'a.pawl.yaml', line: 1, column: 1 };

/** A requirement with a limit of at most 10, for all plants. */
export function requirementOf(changes: Partial<Requirement> = {}): Requirement {
  return {
    name: 'R',
    place,
    measure: 'overshoot',
    signals: {},
    in: undefined,
    quantities: {},
    around: [],
    limit: { at_most: 10 },
    limitPlace: place,
    unit: { text: '', dimension: [0, 0, 0, 0, 0, 0, 0, 0], scale: 1 },
    inDecibels: false,
    holdsFor: 'all',
    scale: undefined,
    reason: undefined,
    ...changes,
  };
}

export const met = (headroom: number): Judgement => ({ kind: 'met', headroom, rank: headroom });
export const broken = (headroom: number): Judgement => ({ kind: 'broken', headroom, rank: headroom });
export const unjudged = (why: string): Judgement => ({
  kind: 'unjudged',
  why,
  rank: Number.NEGATIVE_INFINITY,
});

/** So many independent plants that hold, that break, and that could not be judged. */
export function independent(holding: number, breaking: number, why?: string): IndependentCount {
  const unjudged = why === undefined ? 0 : 1;
  return { tried: holding + breaking + unjudged, broken: breaking, unjudged, why };
}
