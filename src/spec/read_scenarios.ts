import { timeDimension } from './dimension.js';
import { aKind, nameFault } from './names.js';
import { suggestion } from './nearest.js';
import { readSignalValue } from './read_around.js';
import { readEvent } from './read_event.js';
import { readQuantity } from './read_quantity.js';
import type { Reading } from './reading.js';
import type { Dimension, InputEvent, Scenario } from './spec.js';
import { childOf, entriesOf, itemsOf, type MapEntry, type Tree, textOf } from './tree.js';

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
    inputs[input.key] = events.map((event) => readEvent(event, dimension, lasts?.value, reading));
  }
  return {
    name: entry.key,
    place: entry.keyPlace,
    lasts: lasts?.value ?? Number.NaN,
    inputs,
    start: readStart(childOf(entry.value, 'start'), reading),
    startAt: startValues(childOf(entry.value, 'start'), reading),
  };
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

/** `start: { speed: 3 rad/s }` gives states of the plant. */
function startValues(tree: Tree | undefined, reading: Reading): Scenario['startAt'] {
  return entriesOf(tree).flatMap((entry) => readSignalValue(entry, reading) ?? []);
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
