import { declare, type NameEntry, type NameKind } from './names.js';
import { readPoint, readUnit } from './read_quantity.js';
import type { Reading } from './reading.js';
import type { InputDefinition, Unit } from './spec.js';
import { childOf, entriesOf, type MapEntry, type Tree } from './tree.js';

/** Takes the name of an entry into the namespace. */
export function declareEntry(
  entry: MapEntry,
  kind: NameKind,
  unit: Unit | undefined,
  reading: Reading,
  more: Partial<NameEntry> = {},
): void {
  const { key: name, keyPlace: place } = entry;
  declare(
    reading.names,
    {
      name,
      kind,
      place,
      unit,
      adapts: false,
      value: undefined,
      twice: false,
      controller: undefined,
      ...more,
    },
    reading.problems,
  );
}

/** The declared unit of an entry; unknown where it is wrong or the name belongs to an earlier definition. */
export function declaredUnit({ key, keyPlace }: MapEntry, reading: Reading): Unit | undefined {
  const known = reading.names.entries.get(key);
  return known?.place === keyPlace ? known.unit : undefined;
}

/** `constants:` fixed quantities by name; they stand in the namespace only. */
export function readConstants(tree: Tree | undefined, reading: Reading): void {
  for (const entry of entriesOf(tree)) {
    const quantity = readPoint(entry.value, undefined, `\`${entry.key}\``, reading);
    declareEntry(entry, 'constant', quantity?.unit, reading, { value: quantity?.value });
  }
}

/** `inputs:` what comes from outside. */
export function readInputs(tree: Tree | undefined, reading: Reading): InputDefinition[] {
  return entriesOf(tree).map((entry) => {
    const unit = readUnit(childOf(entry.value, 'unit'), reading);
    declareEntry(entry, 'input', unit, reading);
    const rest = readPoint(childOf(entry.value, 'rest'), unit?.dimension, '`rest`', reading);
    return { name: entry.key, place: entry.keyPlace, unit: unit!, rest: rest?.value ?? 0 };
  });
}
