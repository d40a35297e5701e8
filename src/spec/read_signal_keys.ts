import { formatMismatch } from './format_dimension.js';
import { aKind, type NameKind, oneOfKinds } from './names.js';
import { suggestion } from './nearest.js';
import { readCoefficientName } from './read_coefficient_name.js';
import type { Reading } from './reading.js';
import { sameUnit } from './same_unit.js';
import { childOf, type MapTree, type TextTree, textOf } from './tree.js';
import type { MeasureDescription, MeasureKey } from './vocabulary.js';

const traced: readonly NameKind[] = ['plant signal', 'controller signal', 'sensor', 'actuator', 'input'];

/**
 * Reads the keys of a requirement that name signals or coefficients, but for where the loop is opened, and checks that `to`
 * can be compared with `of`.
 */
export function readSignalKeys(
  item: MapTree,
  measure: MeasureDescription,
  reading: Reading,
): Record<string, string> {
  const signals: Record<string, string> = {};
  for (const key of measure.keys) {
    const text = textOf(childOf(item, key.name));
    if (text === undefined) continue;
    const found = readKey(text, key, reading);
    if (found !== undefined) signals[key.name] = found;
  }
  checkComparable(item, signals, reading);
  return signals;
}

/** Undefined also where the key names nothing. */
function readKey(text: TextTree, key: MeasureKey, reading: Reading): string | undefined {
  switch (key.kind) {
    case 'signal':
    case 'target':
      return readSignalKey(text, key, reading);
    case 'controller':
      return readController(text, key.signal, reading);
    case 'coefficient':
      return readCoefficientName(text, `\`${key.name}\``, reading)?.name;
    default:
      return undefined;
  }
}

function readController(
  text: TextTree,
  signal: (controller: string) => string,
  reading: Reading,
): string | undefined {
  const known = [...reading.names.entries.values()].flatMap(({ controller }) => controller ?? []);
  if (known.includes(text.text)) return signal(text.text);
  reading.problems.add(text.place, `unknown controller \`${text.text}\`${suggestion(text.text, known)}`);
  return undefined;
}

function readSignalKey(text: TextTree, key: MeasureKey, reading: Reading): string | undefined {
  const entry = reading.names.entries.get(text.text);
  reading.names.used.add(text.text);
  if (entry !== undefined && traced.includes(entry.kind)) return entry.name;
  const known = [...reading.names.entries.values()].filter(({ kind }) => traced.includes(kind));
  const near = suggestion(
    text.text,
    known.map(({ name }) => name),
  );
  const fault =
    entry === undefined ? `unknown signal \`${text.text}\`` : `\`${text.text}\` is ${aKind(entry.kind)}`;
  const expected = entry === undefined ? '' : `, but \`${key.name}\` names ${oneOfKinds(traced)}`;
  reading.problems.add(text.place, `${fault}${expected}${near}`);
  return undefined;
}

function checkComparable(item: MapTree, signals: Record<string, string>, reading: Reading): void {
  const to = textOf(childOf(item, 'to'));
  const [a, b] = [signals.of, signals.to].map((name) => reading.names.entries.get(name ?? '')?.unit);
  if (to === undefined || a === undefined || b === undefined || sameUnit(a, b)) return;
  reading.problems.add(
    to.place,
    `what \`${signals.of}\` is compared with ${formatMismatch(b.dimension, a.dimension)}`,
  );
}
