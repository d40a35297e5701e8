import { formatDimension } from './format_dimension.js';
import { declare, type NameEntry, type NameKind } from './names.js';
import { readQuantity, readUnit } from './read_quantity.js';
import type { Reading } from './reading.js';
import type { CoefficientDefinition, Firmware, InputDefinition, ParameterDefinition, Unit } from './spec.js';
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
    const quantity = readQuantity(entry.value, undefined, `\`${entry.key}\``, reading);
    declareEntry(entry, 'constant', quantity?.unit, reading, { value: quantity?.value });
  }
}

/** `parameters:` uncertain quantities. */
export function readParameters(tree: Tree | undefined, reading: Reading): ParameterDefinition[] {
  return entriesOf(tree).flatMap((entry) => {
    const parameter = readParameter(entry, reading);
    declareEntry(entry, 'parameter', parameter?.unit, reading, { value: parameter?.nominal });
    return parameter === undefined ? [] : [parameter];
  });
}

function readParameter(
  { key: name, keyPlace: place, value }: MapEntry,
  reading: Reading,
): ParameterDefinition | undefined {
  const nominal = readQuantity(childOf(value, 'nominal'), undefined, '`nominal`', reading);
  const dimension = nominal?.unit.dimension;
  const given = ['spread', 'from', 'to'].filter((key) => childOf(value, key) !== undefined);
  if (value.kind === 'map' && !['spread', 'from,to'].includes(given.join())) {
    if (reading.strange.has(value)) return undefined;
    const found = given.length === 0 ? 'no bounds' : given.map((key) => `\`${key}\``).join(' and ');
    reading.problems.add(
      place,
      `parameter \`${name}\` has ${found}; expected either spread, or from and to (a fixed quantity belongs in constants)`,
    );
    return undefined;
  }
  const spread = readQuantity(childOf(value, 'spread'), undefined, '`spread`', reading);
  const from = readQuantity(childOf(value, 'from'), dimension, '`from`', reading);
  const to = readQuantity(childOf(value, 'to'), dimension, '`to`', reading);
  if (nominal === undefined) return undefined;
  const unit = nominal.decibel ? { ...nominal.unit, text: '' } : nominal.unit;
  const parameter = { name, place, unit, nominal: nominal.value };
  if (spread !== undefined) {
    const half = halfWidth(nominal.value, spread, unit, reading);
    return half === undefined
      ? undefined
      : { ...parameter, low: nominal.value - half, high: nominal.value + half };
  }
  if (from === undefined || to === undefined) return undefined;
  if (from.value > nominal.value || to.value < nominal.value) {
    const order = from.value > to.value ? 'are the wrong way round' : 'do not contain the nominal value';
    reading.problems.add(from.place, `the bounds of \`${name}\` ${order}; expected from ≤ nominal ≤ to`);
  }
  return { ...parameter, low: from.value, high: to.value };
}

function halfWidth(
  nominal: number,
  spread: NonNullable<ReturnType<typeof readQuantity>>,
  unit: Unit,
  reading: Reading,
): number | undefined {
  if (spread.relative && nominal === 0) {
    reading.problems.add(spread.place, 'a spread in % of a nominal 0 is nothing; give from and to');
    return undefined;
  }
  if (spread.value < 0) {
    reading.problems.add(spread.place, 'a spread is a size and cannot be negative');
    return undefined;
  }
  if (spread.relative) return spread.value * Math.abs(nominal);
  const same = spread.unit.dimension.every((exponent, at) => exponent === unit.dimension[at]);
  if (same && !spread.decibel) return spread.value;
  reading.problems.add(
    spread.place,
    `a spread is a share in %, or in ${formatDimension(unit.dimension)} like the nominal value, but this is ${spread.decibel ? 'dB' : formatDimension(spread.unit.dimension)}`,
  );
  return undefined;
}

/** `inputs:` what comes from outside. */
export function readInputs(tree: Tree | undefined, reading: Reading): InputDefinition[] {
  return entriesOf(tree).map((entry) => {
    const unit = readUnit(childOf(entry.value, 'unit'), reading);
    declareEntry(entry, 'input', unit, reading);
    const rest = readQuantity(childOf(entry.value, 'rest'), unit?.dimension, '`rest`', reading);
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
  };
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
