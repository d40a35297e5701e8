import { plainNumber, quotientOf, timeDimension } from './dimension.js';
import { formatDimension } from './format_dimension.js';
import { suggestion } from './nearest.js';
import { readCoefficientName } from './read_coefficient_name.js';
import {
  type Free,
  fit,
  readExpression,
  readFree,
  readRange,
  type Slot,
  type Surroundings,
} from './read_expression.js';
import { readCorner, readTimeConstant } from './read_frequency.js';
import { readList } from './read_list.js';
import { declaredUnit } from './read_named.js';
import { readPair } from './read_pair.js';
import { readPoint } from './read_quantity.js';
import { missing, type Reading } from './reading.js';
import type { Dimension, Expression, Setting, SignalDefinition, Unit } from './spec.js';
import { childOf, entryOf, type MapEntry, type Tree, textOf } from './tree.js';
import type { BlockDescription, Room, SettingDescription, SignalDimensions } from './vocabulary.js';

/** What is known of a signal while its settings are read. */
export interface Workplace {
  block: BlockDescription;
  entry: MapEntry;
  unit: Unit | undefined;
  input: Free | undefined;
  /** SI value of one unit of the output: 1 in the plant. */
  scale: number;
  around: Surroundings;
  reading: Reading;
}

/** Reads a signal: one defining key with its settings, and what may stand beside it. */
export function readSignal(
  entry: MapEntry,
  room: Room,
  around: Surroundings,
  reading: Reading,
): SignalDefinition | undefined {
  const block = definingBlock(entry, room, reading);
  if (block === undefined) return undefined;
  const unit = declaredUnit(entry, reading);
  const scale = around.room.si ? 1 : (unit?.scale ?? 1);
  const ofTree = childOf(entry.value, 'of');
  const pair = block.takesPair ? readPair(ofTree, around, reading) : undefined;
  const place: Workplace = {
    block,
    entry,
    unit,
    scale,
    around,
    reading,
    input: pair?.difference ?? readFree(ofTree, around, reading),
  };
  checkCompanions(place);
  const own: Slot = { dimension: unit?.dimension, scale, what: '`range`' };
  const start = readPoint(childOf(entry.value, 'start'), unit?.dimension, '`start`', reading);
  return {
    name: entry.key,
    place: entry.keyPlace,
    block: block.key,
    settings: readSettings(place),
    of: readOf(place),
    ...(pair && { pair: { target: pair.target, measurement: pair.measurement } }),
    unit: unit!,
    gain: readExpression(childOf(entry.value, 'gain'), gainSlot(place), around, reading),
    range: readRange(childOf(entry.value, 'range'), own, around, reading),
    slew: readExpression(childOf(entry.value, 'slew'), slewSlot(place), around, reading),
    start: start && start.value / scale,
  };
}

function definingBlock(entry: MapEntry, room: Room, reading: Reading): BlockDescription | undefined {
  if (entry.value.kind !== 'map') return undefined;
  const known = reading.vocabulary.blocks.filter((block) => block.rooms.includes(room));
  const found = known.filter((block) => entryOf(entry.value, block.key) !== undefined);
  if (found.length === 1) return found[0];
  const keys = known.map((block) => block.key);
  reading.names.incomplete = true;
  if (found.length > 1) {
    const given = found.map((block) => `\`${block.key}\``).join(' and ');
    reading.problems.add(
      entry.keyPlace,
      `signal \`${entry.key}\` is defined by ${given}; expected exactly one`,
    );
  } else if (!reading.strange.has(entry.value)) {
    const expected = `expected one of ${keys.join(', ')}`;
    reading.problems.add(entry.keyPlace, `signal \`${entry.key}\` has no defining key; ${expected}`);
  }
  return undefined;
}

/** What the block needs or cannot have beside it. */
function checkCompanions({ block, entry, reading }: Workplace): void {
  const of = entryOf(entry.value, 'of');
  const gain = entryOf(entry.value, 'gain');
  if (block.takesInput && of === undefined && !reading.strange.has(entry.value)) {
    reading.names.incomplete = true;
    reading.problems.add(entry.keyPlace, `\`${block.key}\` needs \`of:\`, the signal that it takes`);
  }
  if (!block.takesInput && of !== undefined) {
    reading.problems.add(
      of.keyPlace,
      `\`${block.key}\` takes no \`of:\`; what it depends on stands in its expression`,
    );
  }
  if (block.takesInput && !block.takesPair && of?.value.kind === 'map') {
    reading.names.incomplete = true;
    reading.problems.add(of.keyPlace, `\`${block.key}\` takes one signal, such as \`target - measurement\``);
  }
  if (!block.takesGain && gain !== undefined) {
    reading.problems.add(gain.keyPlace, `\`${block.key}\` takes no \`gain:\` beside it`);
  }
}

/** Without a gain a filter's input is in the unit of its output. */
function readOf(place: Workplace): Expression | undefined {
  const { block, entry, input, unit, scale } = place;
  const tree = childOf(entry.value, 'of');
  if (tree === undefined || !block.takesInput) return undefined;
  if (input === undefined) return missing(tree.place);
  const alike = block.takesGain ? childOf(entry.value, 'gain') === undefined : block.inputLikeOutput === true;
  if (!alike) return input.dimension === undefined ? missing(tree.place) : input.expression;
  const what = `what \`${block.key}\` takes${block.takesGain ? ' without a `gain:`' : ''}`;
  return fit(input, { dimension: unit?.dimension, scale, what });
}

function gainSlot({ unit, input, scale }: Workplace): Slot {
  const known = unit !== undefined && input?.dimension !== undefined;
  return {
    dimension: known ? quotientOf(unit.dimension, input.dimension!) : undefined,
    scale: scale / (input?.scale ?? 1),
    what: '`gain`',
    since: known
      ? `it is in the unit of the signal over that of \`of\`: ${formatDimension(unit.dimension)} over ${formatDimension(input.dimension!)}`
      : undefined,
  };
}

function slewSlot({ unit, scale }: Workplace): Slot {
  return {
    dimension: unit && quotientOf(unit.dimension, timeDimension),
    scale,
    what: '`slew`',
    sign: 'above_zero',
  };
}

function readSettings(place: Workplace): Record<string, Setting> {
  const { block, entry } = place;
  const given = childOf(entry.value, block.key)!;
  const settings: Record<string, Setting> = {};
  for (const description of block.settings) {
    const direct = description.name === (block.main ?? block.key) && given.kind !== 'map';
    const tree = direct ? given : childOf(given, description.name);
    const setting = tree && readSetting(tree, description, place);
    if (setting !== undefined) settings[description.name] = setting;
  }
  checkWindup(given, place);
  return settings;
}

function checkWindup(given: Tree, { entry, reading }: Workplace): void {
  const windup = entryOf(given, 'anti_windup');
  const hasRange = childOf(entry.value, 'range') !== undefined || reading.strange.has(entry.value);
  if (windup === undefined || hasRange) return;
  reading.problems.add(
    windup.keyPlace,
    '`anti_windup` without a `range:` of the signal has nothing to act on',
  );
}

function readSetting(tree: Tree, description: SettingDescription, place: Workplace): Setting | undefined {
  const { around, reading } = place;
  const what = `\`${description.name}\``;
  switch (description.kind) {
    case 'expression': {
      const slot = { ...settingSlot(description.dimension, place), what };
      const late = description.late && { late: true };
      return { kind: 'expression', expression: readExpression(tree, slot, around, reading)!, ...late };
    }
    case 'time_constant':
      return { kind: 'expression', expression: readTimeConstant(tree, what, around, reading)! };
    case 'corner':
      return { kind: 'expression', expression: readCorner(tree, what, around, reading)! };
    case 'coefficients':
      return readCoefficientName(tree, what, reading);
    case 'signals':
    case 'estimates':
    case 'matrix':
      return readList(tree, description, place);
    case 'word':
      return readWord(tree, description.words, what, reading);
  }
}

/**
 * The dimension of a setting and its scale. The rule is a product of powers of output and input, so the powers can be
 * found by trying it on dimensions with a single exponent.
 */
function settingSlot(
  rule: (of: SignalDimensions) => Dimension,
  { unit, input, scale, block, entry }: Workplace,
): Omit<Slot, 'what'> {
  const inputDimension = block.takesInput ? input?.dimension : plainNumber;
  if (unit === undefined || inputDimension === undefined) return { dimension: undefined, scale: 1 };
  const given = childOf(entry.value, block.key);
  const word = (name: string): string | undefined => textOf(childOf(given, name))?.text;
  const probe = plainNumber.map((_, at) => (at === 0 ? 1 : 0));
  const none = rule({ output: plainNumber, input: plainNumber, word })[0];
  const ofOutput = rule({ output: probe, input: plainNumber, word })[0] - none;
  const ofInput = rule({ output: plainNumber, input: probe, word })[0] - none;
  return {
    dimension: rule({ output: unit.dimension, input: inputDimension, word }),
    scale: scale ** ofOutput * (input?.scale ?? 1) ** ofInput,
  };
}

function readWord(tree: Tree, words: readonly string[], what: string, reading: Reading): Setting | undefined {
  const text = textOf(tree);
  if (text === undefined) return undefined;
  if (words.includes(text.text)) return { kind: 'word', word: text.text, place: text.place };
  reading.problems.add(text.place, `${what} cannot be \`${text.text}\`${suggestion(text.text, words)}`);
  return undefined;
}
