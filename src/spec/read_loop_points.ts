import { isPlain, sameDimension } from './dimension.js';
import { formatDimension } from './format_dimension.js';
import { aKind, type NameEntry, type NameKind, oneOfKinds } from './names.js';
import { suggestion } from './nearest.js';
import type { Reading } from './reading.js';
import type { ActuatorDefinition, ControllerDefinition, SensorDefinition } from './spec.js';
import { itemsOf, type TextTree, type Tree, textOf } from './tree.js';
import type { MeasureDescription } from './vocabulary.js';

/** Where a loop can be opened. */
export interface Openable {
  sensors: readonly SensorDefinition[];
  controllers: readonly ControllerDefinition[];
  actuators: readonly ActuatorDefinition[];
}

/** Kinds of signals at which a loop can be opened. */
export const openable: readonly NameKind[] = ['sensor', 'controller signal', 'actuator'];

/** A named signal and where it was written. */
interface Named {
  entry: NameEntry;
  text: TextTree;
}

/**
 * Reads `at`: one signal, or a list of several at which a loop is opened at once. A list of one is that one.
 * @returns the signals' names; undefined where some are wrong, which is reported.
 */
export function readLoopPoints(
  tree: Tree | undefined,
  measure: MeasureDescription,
  openable: Openable,
  reading: Reading,
): string[] | undefined {
  const written = tree?.kind === 'list' ? itemsOf(tree) : tree === undefined ? [] : [tree];
  const texts = written.flatMap((item) => textOf(item) ?? []);
  const named = texts.flatMap((text) => readLoopPoint(text, openable.sensors, reading) ?? []);
  if (texts.length === 0 || texts.length < written.length || named.length < texts.length) return undefined;
  const faults = reading.problems.all().length;
  checkEachOnce(named, reading);
  if (named.length > 1) checkSeveral(named, tree!, measure, openable, reading);
  return reading.problems.all().length === faults ? named.map(({ entry }) => entry.name) : undefined;
}

function readLoopPoint(
  text: TextTree,
  sensors: readonly SensorDefinition[],
  reading: Reading,
): Named | undefined {
  const entry = reading.names.entries.get(text.text);
  reading.names.used.add(text.text);
  if (entry !== undefined && openable.includes(entry.kind)) return { entry, text };
  if (entry?.kind === 'plant signal') return onlySensorOf(entry, text, sensors, reading);
  const known = [...reading.names.entries.values()].filter(({ kind }) => openable.includes(kind));
  const near = suggestion(
    text.text,
    known.map(({ name }) => name),
  );
  const fault =
    entry === undefined ? `unknown signal \`${text.text}\`` : `\`${text.text}\` is ${aKind(entry.kind)}`;
  const expected = entry === undefined ? '' : `, but \`at\` names ${oneOfKinds(openable)}`;
  reading.problems.add(text.place, `${fault}${expected}${near}`);
  return undefined;
}

/** A loop opened at a continuous signal is opened at the one sensor that reads it. */
function onlySensorOf(
  entry: NameEntry,
  text: TextTree,
  sensors: readonly SensorDefinition[],
  reading: Reading,
): Named | undefined {
  const reads = sensors.filter(({ of }) => of.kind === 'name' && of.name === entry.name);
  const sensor = reads.length === 1 ? reading.names.entries.get(reads[0].name) : undefined;
  if (sensor !== undefined) return { entry: sensor, text };
  const found = reads.length === 0 ? 'no sensor reads it by itself' : `${reads.length} sensors read it`;
  reading.problems.add(
    text.place,
    `the loop cannot be opened at the plant signal \`${entry.name}\`, since ${found}; name ${oneOfKinds(openable)}`,
  );
  return undefined;
}

function checkEachOnce(named: readonly Named[], reading: Reading): void {
  named.forEach(({ entry, text }, at) => {
    if (!named.slice(0, at).some((earlier) => earlier.entry === entry)) return;
    const means = text.text === entry.name ? '' : ` means the ${entry.kind} \`${entry.name}\`, which`;
    reading.problems.add(text.place, `\`${text.text}\`${means} stands in \`at\` already; name it once`);
  });
}

function checkSeveral(
  named: readonly Named[],
  tree: Tree,
  measure: MeasureDescription,
  openable: Openable,
  reading: Reading,
): void {
  const several = severalOf(measure);
  if (several === undefined) {
    const others = reading.vocabulary.measures.filter((one) => severalOf(one) !== undefined);
    reading.problems.add(
      tree.place,
      `\`${measure.name}\` opens the loop at one signal, but \`at\` lists ${named.length}; name one of them. Several at once can have ${others.map(({ name }) => name).join(', ')}`,
    );
  }
  if (several === 'of_comparable_size') checkComparable(named, measure, openable, reading);
}

/** Signals are compared in size as shares of their ranges, or in a unit that they have in common. */
function checkComparable(
  named: readonly Named[],
  { name }: MeasureDescription,
  openable: Openable,
  reading: Reading,
): void {
  const [first] = named;
  const other = named.find(({ entry }) => {
    const [one, another] = [first.entry.unit, entry.unit];
    return one && another && !sameDimension(one.dimension, another.dimension);
  });
  const unbounded = named.filter(({ entry }) => !hasRange(entry.name, openable));
  if (other === undefined || unbounded.length === 0) return;
  const names = unbounded.map(({ entry }) => `\`${entry.name}\``);
  const whose = [names.slice(0, -1).join(', '), names.at(-1)].filter((part) => part !== '').join(' and ');
  reading.problems.add(
    other.text.place,
    `\`${name}\` compares signals in size, but ${unitInWords(other.entry)} and ${unitInWords(first.entry)}; give ${whose} a \`range:\`, so that every signal counts as a share of its own, or open the loop at signals of one dimension`,
  );
}

function severalOf({ keys }: MeasureDescription): 'of_any_unit' | 'of_comparable_size' | undefined {
  const key = keys.find(({ kind }) => kind === 'loop_point');
  return key?.kind === 'loop_point' ? key.several : undefined;
}

function hasRange(name: string, { sensors, controllers, actuators }: Openable): boolean {
  const all = [...sensors, ...controllers.flatMap(({ signals }) => signals), ...actuators];
  return all.some((one) => one.name === name && one.range !== undefined);
}

function unitInWords({ name, unit }: NameEntry): string {
  const { dimension } = unit!;
  return `\`${name}\` is ${isPlain(dimension) ? '' : 'in '}${formatDimension(dimension)}`;
}
