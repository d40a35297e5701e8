import type { MeasureResult } from '../measure/measure.js';
import type { Limit, Requirement } from '../spec/spec.js';

/** What a requirement says of one plant. `headroom` is a share of the limit, at most 1; undefined where there is no number. */
export type Judgement =
  | { kind: 'met' | 'broken'; headroom: number | undefined; rank: number }
  | { kind: 'unjudged'; why: string; rank: number };

/** No number ranks as bad as an event that never came, or a trace that left the numbers. */
const worstNumber = -1e8;

/** Judges one result against a requirement's limit. A smaller `rank` is worse; it orders results without a number too. */
export function judge(requirement: Requirement, result: MeasureResult): Judgement {
  switch (result.kind) {
    case 'value': {
      const distance = distanceOf(requirement.limit, requirement.scale, result.value);
      const headroom = Math.min(1, distance);
      return { kind: distance >= 0 ? 'met' : 'broken', headroom, rank: Math.max(worstNumber, distance) };
    }
    case 'never':
      return { kind: 'broken', headroom: undefined, rank: -1e9 * (1 + saturating(result.left)) };
    case 'overflow':
      return { kind: 'broken', headroom: undefined, rank: -1e10 * (1 + 1 / (1 + result.time)) };
    case 'unformed':
      return { kind: 'unjudged', why: result.why, rank: Number.NEGATIVE_INFINITY };
  }
}

/**
 * Distance of a value from its limit, inward, as a share of the limit (of `scale` where the limit is zero; of half the
 * width of `between`); negative when broken.
 */
function distanceOf(limit: Limit, scale: number | undefined, value: number): number {
  const share = (distance: number, of: number): number => {
    const size = scale ?? Math.abs(of);
    return distance === 0 ? 0 : distance / (size === 0 ? 1 : size);
  };
  if ('at_most' in limit) return share(limit.at_most - value, limit.at_most);
  if ('at_least' in limit) return share(value - limit.at_least, limit.at_least);
  const [low, high] = limit.between;
  return share(Math.min(value - low, high - value), (high - low) / 2);
}

/** Grows with x ≥ 0 from 0 towards 1. */
function saturating(x: number): number {
  return Number.isFinite(x) ? x / (1 + x) : 1;
}
