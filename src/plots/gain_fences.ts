import type { GainFence, GainPlot } from '../report/index.js';
import type { Limit, Requirement } from '../spec/spec.js';

/** What a measure looks at: which response, whether its largest or its smallest size, and whether its limit is one over it. */
interface Looked {
  response: GainPlot['response'];
  extreme: 'largest' | 'smallest';
  inverse?: boolean;
  /** Over a band of frequencies; the others are peaks over all. */
  band?: boolean;
}

const looked: Readonly<Record<string, Looked>> = {
  largest_sensitivity: { response: 'sensitivity', extreme: 'largest', band: true },
  sensitivity_peak: { response: 'sensitivity', extreme: 'largest' },
  // The least distance of L from −1 is one over the largest |S|.
  modulus_margin: { response: 'sensitivity', extreme: 'largest', inverse: true },
  largest_following_gain: { response: 'following', extreme: 'largest', band: true },
  complementary_peak: { response: 'following', extreme: 'largest' },
  largest_loop_gain: { response: 'loop', extreme: 'largest', band: true },
  smallest_loop_gain: { response: 'loop', extreme: 'smallest', band: true },
};

/** What a requirement on the size of a response looks at; undefined for any other. */
export function lookedAt({ measure }: Pick<Requirement, 'measure'>): Looked | undefined {
  return Object.hasOwn(looked, measure) ? looked[measure] : undefined;
}

/**
 * The frequencies that a requirement looks at, rad/s.
 * @param end half the sampling frequency.
 */
export function bandOf({ quantities }: Requirement, end: number): { from: number; to: number } {
  const { frequency, from_frequency: from, to_frequency: to } = quantities;
  return { from: frequency ?? from ?? 0, to: Math.min(end, frequency ?? to ?? end) };
}

/** The limit of a requirement as a line over its band; none where it does not keep every size in the band on one side. */
export function gainFence(requirement: Requirement, end: number): GainFence[] {
  const about = lookedAt(requirement);
  if (!about) return [];
  const { extreme, inverse } = about;
  const asked = extreme === 'largest' && !inverse ? upperEnd(requirement.limit) : lowerEnd(requirement.limit);
  if (asked === undefined) return [];
  const value = inverse ? 1 / asked : asked;
  if (!(value > 0 && Number.isFinite(value))) return [];
  const band = bandOf(requirement, end);
  return [
    {
      requirement: requirement.name,
      ...band,
      value,
      forbidden: extreme === 'largest' ? 'above' : 'below',
    },
  ];
}

function upperEnd(limit: Limit): number | undefined {
  if ('at_most' in limit) return limit.at_most;
  return 'between' in limit ? limit.between[1] : undefined;
}

function lowerEnd(limit: Limit): number | undefined {
  if ('at_least' in limit) return limit.at_least;
  return 'between' in limit ? limit.between[0] : undefined;
}
