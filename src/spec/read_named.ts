import { declare, type NameEntry, type NameKind } from './names.js';
import { readPoint, readUnit } from './read_quantity.js';
import type { Reading } from './reading.js';
import type { CoefficientDefinition, Firmware, InputDefinition, Unit } from './spec.js';
import { childOf, entriesOf, entryOf, itemsOf, type MapEntry, type Tree, textOf } from './tree.js';

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

/** `firmware:` the build, its image and where the coefficients are in it. */
export function readFirmware(entry: MapEntry | undefined, reading: Reading): Firmware | undefined {
  if (entry === undefined || entry.value.kind === 'empty') return undefined;
  const { value, keyPlace: place } = entry;
  const image = textOf(childOf(value, 'image'));
  const build =
    entryOf(value, 'build') && itemsOf(childOf(value, 'build')).map((item) => textOf(item)?.text ?? '');
  return {
    place,
    build,
    image: image?.text ?? '',
    imagePlace: image?.place ?? place,
    coefficients: entriesOf(childOf(value, 'coefficients')).map((one) => readCoefficient(one, reading)),
    law: entryOf(value, 'law') && readLaw(childOf(value, 'law'), reading),
  };
}

/** Names of functions, each once. */
function readLaw(tree: Tree | undefined, reading: Reading): Firmware['law'] {
  const names = itemsOf(tree).flatMap((item) => textOf(item) ?? []);
  names.forEach(({ text, place }, at) => {
    const earlier = names.findIndex((one) => one.text === text);
    if (earlier < at)
      reading.problems.add(place, `the function \`${text}\` is already at line ${names[earlier].place.line}`);
  });
  return names.map(({ text, place }) => ({ name: text, place }));
}

function readCoefficient(entry: MapEntry, reading: Reading): CoefficientDefinition {
  const unitTree = childOf(entry.value, 'unit');
  const at = textOf(entry.value) ?? textOf(childOf(entry.value, 'at'));
  const format = textOf(childOf(entry.value, 'format'));
  const unit = unitTree && readUnit(unitTree, reading);
  declareEntry(entry, 'coefficient', unit, reading, { adapts: unitTree === undefined });
  return {
    name: entry.key,
    place: entry.keyPlace,
    at: at?.text ?? '',
    atPlace: at?.place ?? entry.keyPlace,
    format: format?.text,
    unit,
  };
}
