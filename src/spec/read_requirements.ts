import { plainNumber } from './dimension.js';
import { readForBuilds } from './for_builds.js';
import { suggestion } from './nearest.js';
import { readAngularFrequency } from './read_angular_frequency.js';
import { readAround } from './read_around.js';
import { readBound } from './read_bound.js';
import { readLimit } from './read_limit.js';
import { type Openable, readLoopPoints } from './read_loop_points.js';
import { readQuantity, readShare } from './read_quantity.js';
import { readSignalKeys } from './read_signal_keys.js';
import { readStatement } from './read_statement.js';
import type { Reading } from './reading.js';
import type { Dimension, HoldsFor, NamedBuild, Requirement, Scenario } from './spec.js';
import {
  childOf,
  entriesOf,
  entryOf,
  itemsOf,
  type MapEntry,
  type MapTree,
  type Tree,
  textOf,
} from './tree.js';
import { plainUnit } from './units.js';
import type { MeasureDescription } from './vocabulary.js';

/** What requirements refer to. */
export interface Referred extends Openable {
  scenarios: Scenario[];
  /** Where there are several. */
  builds: readonly NamedBuild[] | undefined;
}

/** `requirements:` each one measure with one limit. */
export function readRequirements(
  tree: Tree | undefined,
  referred: Referred,
  reading: Reading,
): Requirement[] {
  const names = new Map<string, number>();
  return itemsOf(tree).flatMap((item) => {
    if (item.kind !== 'map') return [];
    checkName(item, names, reading);
    const measure = measureOf(item, reading);
    return measure === undefined ? [] : [readRequirement(item, measure, referred, reading)];
  });
}

function checkName(item: MapTree, names: Map<string, number>, reading: Reading): void {
  const name = textOf(childOf(item, 'name'));
  if (name === undefined) return;
  const earlier = names.get(name.text);
  if (earlier === undefined) {
    names.set(name.text, name.place.line);
    return;
  }
  reading.problems.add(
    name.place,
    `the requirement \`${name.text}\` is already at line ${earlier}; every requirement has a name of its own`,
  );
}

function measureOf(item: MapTree, reading: Reading): MeasureDescription | undefined {
  const text = textOf(childOf(item, 'measure'));
  if (text === undefined) return undefined;
  const { measures } = reading.vocabulary;
  const found = measures.find((measure) => measure.name === text.text);
  if (found !== undefined) return found;
  const known = measures.map((measure) => measure.name);
  reading.problems.add(text.place, `unknown measure \`${text.text}\`${suggestion(text.text, known)}`);
  return undefined;
}

function readRequirement(
  item: MapTree,
  measure: MeasureDescription,
  referred: Referred,
  reading: Reading,
): Requirement {
  checkKeys(item, measure, reading);
  const points = measure.keys.some(({ kind }) => kind === 'loop_point')
    ? (readLoopPoints(childOf(item, 'at'), measure, referred, reading) ?? [])
    : [];
  const signals: Record<string, string> = {
    ...(points.length === 1 && { at: points[0] }),
    ...readSignalKeys(item, measure, reading),
  };
  // A loop measure has no `of`; without one the result is a plain number.
  const needsOf = measure.keys.some((key) => key.name === 'of');
  const ofDimension = needsOf ? dimensionOf(signals.of, reading) : plainNumber;
  const atDimension = reading.names.entries.get(signals.at ?? '')?.unit?.dimension ?? plainNumber;
  const dimension = ofDimension && measure.dimension(ofDimension, atDimension);
  const limit = readLimit(item, measure, dimension, reading);
  const scale = measure.takesHertz
    ? readAngularFrequency(childOf(item, 'scale'), '`scale`', reading)
    : readQuantity(childOf(item, 'scale'), dimension, '`scale`', reading);
  if (scale !== undefined && scale.value <= 0) reading.problems.add(scale.place, '`scale` must be above 0');
  const place = textOf(childOf(item, 'name'))?.place ?? item.place;
  const forBuilds = readForBuilds(entryOf(item, 'builds'), referred.builds, reading);
  return {
    name: textOf(childOf(item, 'name'))?.text ?? '',
    place,
    measure: measure.name,
    signals,
    ...(points.length > 1 && { atSeveral: points }),
    in: readScenarioName(item, measure, referred.scenarios, reading),
    quantities: readQuantities(item, measure, ofDimension, reading),
    ...readStatements(item, measure, ofDimension, reading),
    around: readAround(entryOf(item, 'around'), measure, reading),
    limit: limit?.limit ?? { at_most: Number.NaN },
    limitPlace: limit?.place ?? place,
    unit: limit?.unit ?? plainUnit,
    inDecibels: limit?.inDecibels ?? false,
    holdsFor: readHoldsFor(entryOf(item, 'holds_for'), measure, reading),
    ...(forBuilds && { forBuilds }),
    scale: scale?.value,
    reason: textOf(childOf(item, 'reason'))?.text,
  };
}

/** A key of another measure, and a key that this one needs. */
function checkKeys(item: MapTree, measure: MeasureDescription, reading: Reading): void {
  const own = measure.keys.map((key) => key.name);
  const others = reading.vocabulary.measures.flatMap((other) => other.keys.map((key) => key.name));
  for (const { key, keyPlace } of entriesOf(item)) {
    if (own.includes(key) || !others.includes(key)) continue;
    reading.problems.add(
      keyPlace,
      `\`${measure.name}\` has no key \`${key}\`; its own keys: ${own.join(', ')}`,
    );
  }
  const place = textOf(childOf(item, 'measure'))?.place ?? item.place;
  const absent = measure.keys.filter((key) => !key.optional && entryOf(item, key.name) === undefined);
  if (absent.length === 0 || reading.strange.has(item)) return;
  const list = absent.map((key) => `\`${key.name}:\` (${key.meaning})`).join(' and ');
  reading.problems.add(place, `\`${measure.name}\` needs ${list}`);
}

function readScenarioName(
  item: MapTree,
  measure: MeasureDescription,
  scenarios: Scenario[],
  reading: Reading,
): string | undefined {
  const entry = entryOf(item, 'in');
  const name = textOf(entry?.value);
  if (measure.basis !== 'trace') {
    if (entry !== undefined) {
      const what = measure.basis === 'loop' ? 'loop' : 'build';
      reading.problems.add(
        entry.keyPlace,
        `\`${measure.name}\` is a measure of the ${what} and needs no scenario`,
      );
    }
    return undefined;
  }
  const known = scenarios.map((scenario) => scenario.name);
  if (entry === undefined) {
    const place = textOf(childOf(item, 'measure'))?.place ?? item.place;
    const which = known.length === 0 ? 'but there are none' : `one of ${known.join(', ')}`;
    reading.problems.add(place, `\`${measure.name}\` needs \`in:\`, a scenario: ${which}`);
  }
  if (name === undefined || known.includes(name.text)) return name?.text;
  reading.problems.add(name.place, `unknown scenario \`${name.text}\`${suggestion(name.text, known)}`);
  return undefined;
}

function readQuantities(
  item: MapTree,
  measure: MeasureDescription,
  ofDimension: Dimension | undefined,
  reading: Reading,
): Record<string, number> {
  const quantities: Record<string, number> = {};
  for (const key of measure.keys) {
    if (key.kind !== 'share' && key.kind !== 'quantity' && key.kind !== 'frequency') continue;
    const dimension = key.kind === 'quantity' ? ofDimension && key.dimension(ofDimension) : plainNumber;
    const [tree, what] = [childOf(item, key.name), `\`${key.name}\``];
    const quantity =
      key.kind === 'frequency'
        ? readAngularFrequency(tree, what, reading)
        : readQuantity(tree, dimension, what, reading);
    if (quantity === undefined) continue;
    if (quantity.value <= 0) reading.problems.add(quantity.place, `\`${key.name}\` must be above 0`);
    quantities[key.name] = quantity.value;
  }
  return quantities;
}

/** What a measure over time is told: a statement, or the corners of bounds. */
function readStatements(
  item: MapTree,
  measure: MeasureDescription,
  ofDimension: Dimension | undefined,
  reading: Reading,
): Pick<Requirement, 'statement' | 'bounds'> {
  const result: Pick<Requirement, 'statement' | 'bounds'> = {};
  for (const { name, kind } of measure.keys) {
    const tree = childOf(item, name);
    if (tree === undefined) continue;
    if (kind === 'statement') result.statement = readStatement(tree, reading);
    if (kind === 'bound')
      result.bounds = { ...result.bounds, [name]: readBound(tree, ofDimension, `\`${name}\``, reading) };
  }
  return result;
}

/** A coefficient without a unit is a plain number. */
function dimensionOf(name: string | undefined, reading: Reading): Dimension | undefined {
  const entry = reading.names.entries.get(name ?? '');
  return entry?.adapts ? plainNumber : entry?.unit?.dimension;
}

/** `all` unless said otherwise; what is about the build alone is the same for every plant. */
function readHoldsFor(entry: MapEntry | undefined, measure: MeasureDescription, reading: Reading): HoldsFor {
  if (measure.basis === 'firmware') {
    if (entry !== undefined)
      reading.problems.add(
        entry.keyPlace,
        `\`${measure.name}\` is a measure of the build, the same for every plant, and has no \`holds_for:\``,
      );
    return 'nominal';
  }
  const tree = entry?.value;
  const text = textOf(tree);
  if (text === undefined || text.text === 'all') return 'all';
  if (text.text === 'nominal') return 'nominal';
  if (/^[A-Za-z]/.test(text.text)) {
    const near = suggestion(text.text, ['nominal', 'all', '99 %']);
    reading.problems.add(text.place, `\`holds_for\` cannot be \`${text.text}\`${near}`);
    return 'all';
  }
  const share = readShare(tree, '`holds_for`', reading);
  if (share !== undefined && (share <= 0 || share >= 1)) {
    reading.problems.add(
      text.place,
      '`holds_for` is a share above 0 % and below 100 %; for every plant write all',
    );
  }
  return share ?? 'all';
}
