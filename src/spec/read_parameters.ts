import { evaluateExpression } from './evaluate_expression.js';
import { formatDimension } from './format_dimension.js';
import { derivedRoom, type NameEntry } from './names.js';
import { readDistribution, valuesGiven } from './read_distribution.js';
import { readExpression } from './read_expression.js';
import { declareEntry } from './read_named.js';
import { type ReadQuantity, readPoint, readQuantity, readUnit } from './read_quantity.js';
import { isWhole, type Reading } from './reading.js';
import type { Expression, ParameterDefinition, Unit } from './spec.js';
import { childOf, entriesOf, type MapEntry, type Tree } from './tree.js';

/** `parameters:` uncertain quantities, and those derived from them, in the order of the file. */
export function readParameters(tree: Tree | undefined, reading: Reading): ParameterDefinition[] {
  const entries = entriesOf(tree);
  const found = new Map<string, ParameterDefinition>();
  for (const entry of entries.filter((one) => !isDerived(one))) {
    const parameter = readParameter(entry, reading);
    declareEntry(entry, 'parameter', parameter?.unit, reading, { value: parameter?.nominal });
    if (parameter !== undefined) found.set(entry.key, parameter);
  }
  for (const parameter of readDerived(entries.filter(isDerived), found, reading)) {
    found.set(parameter.name, parameter);
  }
  return entries.flatMap(({ key }) => found.get(key) ?? []);
}

function isDerived({ value }: MapEntry): boolean {
  return childOf(value, 'value') !== undefined;
}

/**
 * Those that are an expression of others. In the order of the file: one may use what stands above it, so that none can
 * depend on itself, and every free one.
 */
function readDerived(
  entries: MapEntry[],
  free: ReadonlyMap<string, ParameterDefinition>,
  reading: Reading,
): ParameterDefinition[] {
  const nominal = new Map([...free.values()].map((parameter) => [parameter.name, parameter.nominal]));
  return entries.flatMap((entry) => {
    reportOthers(entry, reading);
    const unit = readUnit(childOf(entry.value, 'unit'), reading);
    const slot = { dimension: unit?.dimension, scale: 1, what: '`value`' };
    const room = { room: derivedRoom, convertsFreely: true };
    const derived = readExpression(childOf(entry.value, 'value'), slot, room, reading);
    const value =
      derived && isWhole(derived) ? nominalOf(derived, nominal, reading.names.entries) : undefined;
    declareEntry(entry, 'parameter', unit, reading, { value });
    if (unit === undefined || derived === undefined || value === undefined) return [];
    nominal.set(entry.key, value);
    return [
      { name: entry.key, place: entry.keyPlace, unit, nominal: value, low: value, high: value, derived },
    ];
  });
}

function nominalOf(
  of: Expression,
  nominal: ReadonlyMap<string, number>,
  entries: ReadonlyMap<string, NameEntry>,
): number {
  return evaluateExpression(of, (name) => nominal.get(name) ?? entries.get(name)?.value ?? Number.NaN);
}

function reportOthers({ key, value }: MapEntry, reading: Reading): void {
  for (const other of entriesOf(value)) {
    if (other.key === 'value' || other.key === 'unit') continue;
    reading.problems.add(
      other.keyPlace,
      `parameter \`${key}\` follows from others by \`value\` and cannot have \`${other.key}\`; expected value and unit alone`,
    );
  }
}

function readParameter(
  { key: name, keyPlace: place, value }: MapEntry,
  reading: Reading,
): ParameterDefinition | undefined {
  const nominalTree = childOf(value, 'nominal');
  if (value.kind === 'map' && nominalTree === undefined) {
    reading.problems.add(
      place,
      `parameter \`${name}\` has no nominal value; expected { nominal: …, spread: … }, or { value: …, unit: … } for one that follows from others`,
    );
    return undefined;
  }
  const nominal = readPoint(nominalTree, undefined, '`nominal`', reading);
  if (value.kind === 'map' && !hasBounds(name, place, value, reading)) return undefined;
  const bounds = nominal && readBounds(name, value, nominal, reading);
  if (nominal === undefined || bounds === undefined) return undefined;
  const unit = nominal.decibel ? { ...nominal.unit, text: '' } : nominal.unit;
  const parameter = { name, place, unit, nominal: nominal.value, ...bounds };
  const distribution = readDistribution(value, parameter, reading);
  return distribution === undefined ? parameter : { ...parameter, distribution };
}

function hasBounds(name: string, place: MapEntry['keyPlace'], value: Tree, reading: Reading): boolean {
  const given = ['spread', 'from', 'to', 'values'].filter((key) => childOf(value, key) !== undefined);
  if (['spread', 'from,to', 'values'].includes(given.join())) return true;
  if (reading.strange.has(value)) return false;
  const found = given.length === 0 ? 'no bounds' : given.map((key) => `\`${key}\``).join(' and ');
  reading.problems.add(
    place,
    `parameter \`${name}\` has ${found}; expected either spread, or from and to (a fixed quantity belongs in constants)`,
  );
  return false;
}

function readBounds(
  name: string,
  value: Tree,
  nominal: ReadQuantity,
  reading: Reading,
): { low: number; high: number } | undefined {
  if (childOf(value, 'values') !== undefined) {
    const values = valuesGiven(name, value, nominal, reading);
    return values && { low: values[0], high: values[values.length - 1] };
  }
  const { dimension } = nominal.unit;
  const spread = readQuantity(childOf(value, 'spread'), undefined, '`spread`', reading);
  const from = readPoint(childOf(value, 'from'), dimension, '`from`', reading);
  const to = readPoint(childOf(value, 'to'), dimension, '`to`', reading);
  if (spread !== undefined) {
    const half = halfWidth(nominal.value, spread, nominal.unit, reading);
    return half === undefined ? undefined : { low: nominal.value - half, high: nominal.value + half };
  }
  if (from === undefined || to === undefined) return undefined;
  if (from.value > nominal.value || to.value < nominal.value) {
    const order = from.value > to.value ? 'are the wrong way round' : 'do not contain the nominal value';
    reading.problems.add(from.place, `the bounds of \`${name}\` ${order}; expected from ≤ nominal ≤ to`);
  }
  return { low: from.value, high: to.value };
}

function halfWidth(nominal: number, spread: ReadQuantity, unit: Unit, reading: Reading): number | undefined {
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
