import { timeDimension } from './dimension.js';
import { aKind, nameFault, scenarioRoom } from './names.js';
import { suggestion } from './nearest.js';
import { nominalValue } from './nominal_value.js';
import { readExpression, type Slot, type Surroundings } from './read_expression.js';
import { readQuantity } from './read_quantity.js';
import { missing, type Reading } from './reading.js';
import type { Dimension, InputEvent, Scenario } from './spec.js';
import { childOf, entriesOf, entryOf, itemsOf, type MapEntry, type Tree, textOf } from './tree.js';

const around: Surroundings = { room: scenarioRoom, convertsFreely: true };

/** `scenarios:` inputs over time. */
export function readScenarios(tree: Tree | undefined, reading: Reading): Scenario[] {
  return entriesOf(tree).map((entry) => readScenario(entry, reading));
}

function readScenario(entry: MapEntry, reading: Reading): Scenario {
  const fault = nameFault(entry.key);
  if (fault !== undefined) reading.problems.add(entry.keyPlace, fault);
  const lasts = readQuantity(childOf(entry.value, 'lasts'), timeDimension, '`lasts`', reading);
  if (lasts !== undefined && lasts.value <= 0) {
    reading.problems.add(lasts.place, 'a scenario must last longer than 0 s');
  }
  const inputs: Record<string, InputEvent[]> = {};
  for (const input of entriesOf(childOf(entry.value, 'inputs'))) {
    const dimension = inputDimension(input, reading);
    const events = input.value.kind === 'list' ? itemsOf(input.value) : [input.value];
    inputs[input.key] = events.map(
      (event) => readEvent(event, dimension, lasts?.value, reading) ?? unread(event),
    );
  }
  return {
    name: entry.key,
    place: entry.keyPlace,
    lasts: lasts?.value ?? Number.NaN,
    inputs,
    start: readStart(childOf(entry.value, 'start'), reading),
  };
}

/** Stands for an event that is wrong: something happens, but it is not known when. */
function unread({ place }: Tree): InputEvent {
  return { kind: 'step', amount: missing(place), at: missing(place), place };
}

function inputDimension({ key, keyPlace }: MapEntry, reading: Reading): Dimension | undefined {
  const entry = reading.names.entries.get(key);
  if (entry?.kind === 'input') return entry.unit?.dimension;
  const known = [...reading.names.entries.values()]
    .filter(({ kind }) => kind === 'input')
    .map(({ name }) => name);
  const found =
    entry === undefined ? `unknown input \`${key}\`` : `\`${key}\` is ${aKind(entry.kind)}, not an input`;
  reading.problems.add(keyPlace, `${found}${suggestion(key, known)}`);
  return undefined;
}

function readStart(tree: Tree | undefined, reading: Reading): Scenario['start'] {
  const text = textOf(tree);
  if (text === undefined || text.text === 'rest') return 'rest';
  if (text.text !== 'zero') {
    reading.problems.add(
      text.place,
      `\`start\` cannot be \`${text.text}\`${suggestion(text.text, ['rest', 'zero'])}`,
    );
  }
  return 'zero';
}

function readEvent(
  tree: Tree,
  dimension: Dimension | undefined,
  lasts: number | undefined,
  reading: Reading,
): InputEvent | undefined {
  if (tree.kind !== 'map') return undefined;
  const kinds = (['step', 'pulse'] as const).filter((key) => entryOf(tree, key) !== undefined);
  if (kinds.length !== 1) {
    if (reading.strange.has(tree)) return undefined;
    const found = kinds.length === 0 ? 'neither step nor pulse' : 'both step and pulse';
    reading.problems.add(tree.place, `this event has ${found}; expected one of them`);
    return undefined;
  }
  const [kind] = kinds;
  const time = (key: string): Slot => ({ dimension: timeDimension, scale: 1, what: `\`${key}\`` });
  const amountTree = childOf(tree, kind)!;
  const amount = readExpression(
    amountTree,
    { dimension, scale: 1, what: `\`${kind}\``, size: true },
    around,
    reading,
  )!;
  const at = readExpression(childOf(tree, 'at'), time('at'), around, reading) ?? missing(tree.place);
  const forEntry = entryOf(tree, 'for');
  const length = readExpression(forEntry?.value, time('for'), around, reading);
  if (kind === 'pulse' && forEntry === undefined) {
    reading.problems.add(tree.place, 'a pulse needs `for:`, its length in time');
  }
  if (kind === 'step' && forEntry !== undefined) {
    reading.problems.add(forEntry.keyPlace, 'a step stays and has no `for:`; a change that ends is a pulse');
  }
  const event: InputEvent =
    kind === 'step'
      ? { kind, amount, at, place: tree.place }
      : { kind, amount, at, lasts: length ?? missing(tree.place), place: tree.place };
  checkTimes(event, lasts, reading);
  return event;
}

/** An event that never happens would make a requirement hold for nothing. */
function checkTimes(event: InputEvent, lasts: number | undefined, reading: Reading): void {
  const at = nominalValue(event.at, reading.names);
  if (at !== undefined && (at < 0 || (lasts !== undefined && at >= lasts))) {
    reading.problems.add(
      event.at.place,
      `this event at ${at} s lies outside the scenario, which runs from 0 s to ${lasts ?? '?'} s`,
    );
  }
  if (event.kind !== 'pulse') return;
  const length = nominalValue(event.lasts, reading.names);
  if (length !== undefined && length <= 0) {
    reading.problems.add(event.lasts.place, 'a pulse must be longer than 0 s');
  } else if (at !== undefined && length !== undefined && lasts !== undefined && at + length > lasts) {
    reading.problems.add(
      event.lasts.place,
      `this pulse ends at ${at + length} s, after the scenario, which lasts ${lasts} s`,
    );
  }
}
