import { aKind } from './names.js';
import { suggestion } from './nearest.js';
import { readPoint } from './read_quantity.js';
import type { Reading } from './reading.js';
import type { Requirement } from './spec.js';
import { entriesOf, type MapEntry } from './tree.js';
import type { MeasureDescription } from './vocabulary.js';

/** Reads `around:`, the signal values at which the loop is linearised. */
export function readAround(
  entry: MapEntry | undefined,
  measure: MeasureDescription,
  reading: Reading,
): Requirement['around'] {
  if (entry === undefined) return [];
  if (measure.basis !== 'loop') {
    const why =
      measure.basis === 'trace'
        ? 'is a measure of a trace and has no `around:`; it starts where its scenario starts'
        : 'is a measure of the build and has no `around:`';
    reading.problems.add(entry.keyPlace, `\`${measure.name}\` ${why}`);
    return [];
  }
  return entriesOf(entry.value).flatMap((one) => readSignalValue(one, reading) ?? []);
}

/** The value of a signal at a point, in SI; undefined where it is wrong (then reported). */
export function readSignalValue(
  { key, keyPlace, value }: MapEntry,
  reading: Reading,
): Requirement['around'][number] | undefined {
  const { entries } = reading.names;
  const signals = [...entries.values()].filter(
    ({ kind }) => !['parameter', 'coefficient', 'constant'].includes(kind),
  );
  const signal = signals.find(({ name }) => name === key);
  if (signal === undefined) {
    const known = signals.map(({ name }) => name);
    const fault = entries.has(key)
      ? `\`${key}\` is ${aKind(entries.get(key)!.kind)}, not a signal`
      : `unknown signal \`${key}\``;
    reading.problems.add(keyPlace, `${fault}${suggestion(key, known)}`);
    return undefined;
  }
  const quantity = readPoint(value, signal.unit?.dimension, `\`${key}\``, reading);
  return quantity && { name: key, value: quantity.value, place: keyPlace };
}
