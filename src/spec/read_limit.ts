import { readAngularFrequency } from './read_angular_frequency.js';
import { type ReadQuantity, readQuantity } from './read_quantity.js';
import type { Reading } from './reading.js';
import type { Dimension, Limit, Place, Unit } from './spec.js';
import { childOf, entryOf, itemsOf, type MapEntry, type MapTree, textOf } from './tree.js';
import type { MeasureDescription } from './vocabulary.js';

/** A limit with its unit as written. */
export interface ReadLimit {
  limit: Limit;
  place: Place;
  unit: Unit;
  inDecibels: boolean;
}

/** Reads the one limit of a requirement; undefined where it has none or it is wrong (reported). */
export function readLimit(
  item: MapTree,
  measure: MeasureDescription,
  dimension: Dimension | undefined,
  reading: Reading,
): ReadLimit | undefined {
  const given = ['at_most', 'at_least', 'between'].flatMap((key) => entryOf(item, key) ?? []);
  if (given.length !== 1) {
    reportCount(item, given, reading);
    return undefined;
  }
  const [entry] = given;
  const parts = entry.key === 'between' ? itemsOf(entry.value) : [entry.value];
  const bounds = parts.map((part) => {
    const what = `the limit of \`${measure.name}\``;
    const bound = measure.takesHertz
      ? readAngularFrequency(part, what, reading)
      : readQuantity(part, dimension, what, reading);
    return bound && checkedBound(bound, measure, reading);
  });
  if (bounds.length === 0 || bounds.some((bound) => bound === undefined)) return undefined;
  return limitOf(entry, bounds as ReadQuantity[], reading);
}

function reportCount(item: MapTree, given: MapEntry[], reading: Reading): void {
  if (given.length === 0) {
    if (reading.strange.has(item)) return;
    const place = textOf(childOf(item, 'name'))?.place ?? item.place;
    reading.problems.add(place, 'this requirement has no limit; expected one of at_most, at_least, between');
    return;
  }
  const keys = given.map(({ key }) => `\`${key}\``).join(' and ');
  reading.problems.add(
    given[1].keyPlace,
    `this requirement has ${keys}; expected one limit: write two requirements, or between`,
  );
}

function checkedBound(
  bound: ReadQuantity,
  measure: MeasureDescription,
  reading: Reading,
): ReadQuantity | undefined {
  if (!bound.decibel || measure.ratio) return bound;
  reading.problems.add(
    bound.place,
    `\`${measure.name}\` is no ratio of amplitudes, so its limit cannot be in dB`,
  );
  return undefined;
}

function limitOf(entry: MapEntry, bounds: ReadQuantity[], reading: Reading): ReadLimit {
  const [first, second] = bounds;
  const common = { place: first.place, unit: first.unit, inDecibels: first.decibel };
  if (entry.key === 'at_most') return { ...common, limit: { at_most: first.value } };
  if (entry.key === 'at_least') return { ...common, limit: { at_least: first.value } };
  if (second !== undefined && first.value >= second.value) {
    reading.problems.add(first.place, 'the lower limit comes first and must be below the upper one');
  }
  return { ...common, limit: { between: [first.value, second?.value ?? Number.NaN] } };
}
