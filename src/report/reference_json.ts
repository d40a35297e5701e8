import type { Reference } from '../verdict/latched/reference.js';
import { type Json, jsonNumber, stableJson } from './stable_json.js';

/** A latched reference as the text of its file: sorted, one value a line, so that a change of it can be read in a diff. */
export function referenceJson(reference: Reference): string {
  return stableJson(jsonOf(reference));
}

function jsonOf(value: unknown): Json {
  if (typeof value === 'number') return jsonNumber(value);
  if (Array.isArray(value)) return value.map(jsonOf);
  if (value === null || typeof value !== 'object') return value as string | boolean | null;
  const kept = Object.entries(value).filter(([, inner]) => inner !== undefined);
  return Object.fromEntries(kept.map(([key, inner]) => [key, jsonOf(inner)]));
}
