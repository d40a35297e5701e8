import type { MeasureResult } from '../measure/measure.js';
import type { Limit, Requirement } from '../spec/spec.js';
import type { MeasureDescription } from '../spec/vocabulary.js';

/** A limit so many times looser than the worst plant guards nothing that a reviewer would notice. */
const looser = 1000;

/**
 * Why a requirement guards nothing, in words for a warning, or undefined where it does: its limit lies beyond what the
 * measure can be, its signal never moves, or every plant that was tried stays a thousand times away from the limit.
 * @param results of all plants tried.
 * @param still whether every signal that it follows stays as it is in its scenario.
 */
export function idleRequirement(
  requirement: Requirement,
  measure: MeasureDescription,
  results: readonly MeasureResult[],
  still: boolean,
): string | undefined {
  const { limit } = requirement;
  const beyond = beyondTheMeasure(limit, measure);
  if (beyond) return beyond;
  if (still) {
    const signals = Object.values(requirement.signals).map((name) => `'${name}'`);
    const moving = signals.length > 0 ? signals.join(' and ') : 'no signal in its statement';
    const verb = signals.length === 0 ? 'moves' : signals.length === 1 ? 'never moves' : 'never move';
    return `${moving} ${verb} in scenario '${requirement.in}'`;
  }
  // How much a change stays below what it may be says nothing of the next one.
  return measure.againstLatched ? undefined : farAway(limit, measure, results);
}

function beyondTheMeasure(limit: Limit, { name, least, most }: MeasureDescription): string | undefined {
  const low = 'at_least' in limit ? limit.at_least : 'between' in limit ? limit.between[0] : undefined;
  const high = 'at_most' in limit ? limit.at_most : 'between' in limit ? limit.between[1] : undefined;
  const lowIdle = low === undefined || (least !== undefined && low <= least);
  const highIdle = high === undefined || (most !== undefined && high >= most);
  if (!(lowIdle && highIdle)) return undefined;
  const ends = [
    ...(low === undefined ? [] : [`no plant gives less than ${least}`]),
    ...(high === undefined ? [] : [`no plant gives more than ${most}`]),
  ];
  return `of '${name}' ${ends.join(' and ')} (SI), so that this limit cannot be broken`;
}

function farAway(
  limit: Limit,
  { name }: MeasureDescription,
  results: readonly MeasureResult[],
): string | undefined {
  const values = results.flatMap((result) => (result.kind === 'value' ? [result.value] : []));
  if (values.length === 0 || values.length < results.length) return undefined;
  if ('at_most' in limit) {
    const worst = Math.max(...values);
    // A value of zero is what a good loop gives (no overshoot, no time at the limit), not a sign of a loose limit.
    if (!(worst > 0 && worst * looser <= limit.at_most)) return undefined;
    return `the largest '${name}' of all plants, ${shown(worst)}, is ${times(limit.at_most / worst)} below its limit of ${shown(limit.at_most)} (SI)`;
  }
  if (!('at_least' in limit) || limit.at_least <= 0) return undefined;
  const worst = Math.min(...values);
  if (worst === Number.POSITIVE_INFINITY) return `'${name}' is infinite on every plant`;
  if (!(worst >= looser * limit.at_least)) return undefined;
  return `the smallest '${name}' of all plants, ${shown(worst)}, is ${times(worst / limit.at_least)} above its limit of ${shown(limit.at_least)} (SI)`;
}

function shown(value: number): string {
  return String(Number(value.toPrecision(3)));
}

function times(ratio: number): string {
  return `${Number(ratio.toPrecision(2)).toLocaleString('en')} times`;
}
