import type { ParameterDefinition } from '../spec/spec.js';
import { normalQuantile, normalShareBelow } from './normal_distribution.js';

/** The value (SI) of a parameter below which the share u of its distribution lies, 0 ≤ u < 1. */
export function quantile(parameter: ParameterDefinition, u: number): number {
  const { low, high, nominal, distribution } = parameter;
  switch (distribution?.kind) {
    case undefined:
    case 'uniform':
      return low + (high - low) * u;
    case 'triangular':
      return triangular(low, nominal, high, u);
    case 'log_uniform':
      return within(low, high, low * (high / low) ** u);
    case 'normal':
      return within(low, high, cutNormal(parameter, distribution.deviation, u));
    case 'values':
      return distribution.values[Math.floor(u * distribution.values.length)];
  }
}

function within(low: number, high: number, value: number): number {
  return Math.min(high, Math.max(low, value));
}

/** Inverse of the triangular distribution with its peak at the nominal value. */
function triangular(low: number, peak: number, high: number, u: number): number {
  const width = high - low;
  const rising = (peak - low) / width;
  if (u < rising) return low + Math.sqrt(u * width * (peak - low));
  return high - Math.sqrt((1 - u) * width * (high - peak));
}

/** Normal about the nominal value, cut at the bounds: the shares outside them do not occur. */
function cutNormal({ low, high, nominal }: ParameterDefinition, deviation: number, u: number): number {
  const below = normalShareBelow((low - nominal) / deviation);
  const upTo = normalShareBelow((high - nominal) / deviation);
  const share = below + u * (upTo - below);
  if (share <= 0) return low;
  return share >= 1 ? high : nominal + deviation * normalQuantile(share);
}
