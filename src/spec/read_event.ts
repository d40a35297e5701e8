import { timeDimension } from './dimension.js';
import { scenarioRoom } from './names.js';
import { nominalValue } from './nominal_value.js';
import { readBound } from './read_bound.js';
import { readExpression, type Surroundings } from './read_expression.js';
import { readFrequency } from './read_frequency.js';
import { missing, type Reading } from './reading.js';
import type { Dimension, Expression, InputEvent } from './spec.js';
import { childOf, entryOf, type Tree } from './tree.js';
import type { ShapeDescription, ShapeSetting } from './vocabulary.js';

const around: Surroundings = { room: scenarioRoom, convertsFreely: true };

/**
 * Reads something that an input does. Where it is wrong (and then reported), something stands for it of which the time is not
 * known, so that nothing else is said about it.
 * @param dimension of the input.
 * @param lasts length of the scenario, s.
 */
export function readEvent(
  tree: Tree,
  dimension: Dimension | undefined,
  lasts: number | undefined,
  reading: Reading,
): InputEvent {
  const shape = shapeOf(tree, reading);
  if (shape === undefined) {
    return {
      shape: 'step',
      settings: {},
      points: {},
      at: missing(tree.place),
      lasts: undefined,
      place: tree.place,
    };
  }
  const event: InputEvent = {
    shape: shape.key,
    settings: readSettings(tree, shape, dimension, reading),
    points: readPoints(tree, shape, dimension, reading),
    at: readTime(tree, 'at', reading) ?? missing(tree.place),
    lasts: readLength(tree, shape, reading),
    place: tree.place,
  };
  checkTimes(event, lasts, reading);
  return event;
}

function shapeOf(tree: Tree, reading: Reading): ShapeDescription | undefined {
  if (tree.kind !== 'map') return undefined;
  const { shapes } = reading.vocabulary;
  const found = shapes.filter(({ key }) => entryOf(tree, key) !== undefined);
  if (found.length === 1) return found[0];
  if (reading.strange.has(tree)) return undefined;
  const what = found.length === 0 ? 'no shape' : found.map(({ key }) => `\`${key}\``).join(' and ');
  const keys = shapes.map(({ key }) => key).join(', ');
  reading.problems.add(tree.place, `this event has ${what}; expected one of ${keys}`);
  return undefined;
}

function readSettings(
  tree: Tree,
  shape: ShapeDescription,
  dimension: Dimension | undefined,
  reading: Reading,
): Record<string, Expression> {
  const given = childOf(tree, shape.key)!;
  const settings: Record<string, Expression> = {};
  for (const setting of shape.settings) {
    if (setting.kind === 'points') continue;
    const direct = setting.name === shape.key && given.kind !== 'map';
    const expression = readSetting(
      direct ? given : childOf(given, setting.name),
      setting,
      dimension,
      reading,
    );
    if (expression) settings[setting.name] = expression;
  }
  return settings;
}

function readPoints(
  tree: Tree,
  shape: ShapeDescription,
  dimension: Dimension | undefined,
  reading: Reading,
): InputEvent['points'] {
  const points: InputEvent['points'] = {};
  for (const { name, kind } of shape.settings) {
    if (kind === 'points') points[name] = readBound(childOf(tree, name)!, dimension, `\`${name}\``, reading);
  }
  return points;
}

function readSetting(
  tree: Tree | undefined,
  setting: ShapeSetting,
  dimension: Dimension | undefined,
  reading: Reading,
): Expression | undefined {
  const what = `\`${setting.name}\``;
  if (setting.kind === 'frequency') return readFrequency(tree, what, around, reading);
  const own = dimension && setting.dimension(dimension);
  return readExpression(tree, { dimension: own, scale: 1, what, size: true }, around, reading);
}

function readTime(tree: Tree, key: string, reading: Reading): Expression | undefined {
  const slot = { dimension: timeDimension, scale: 1, what: `\`${key}\`` };
  return readExpression(childOf(tree, key), slot, around, reading);
}

function readLength(tree: Tree, shape: ShapeDescription, reading: Reading): Expression | undefined {
  const entry = entryOf(tree, 'for');
  if (shape.length === 'needed' && entry === undefined) {
    reading.problems.add(tree.place, `a ${shape.key} needs \`for:\`, its length in time`);
    return missing(tree.place);
  }
  if (shape.length === 'none' && entry !== undefined) {
    const hint = shape.isStep ? '; a change that ends is a pulse' : '';
    reading.problems.add(entry.keyPlace, `a ${shape.key} has no \`for:\`${hint}`);
    return undefined;
  }
  return readTime(tree, 'for', reading);
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
  const length = event.lasts && nominalValue(event.lasts, reading.names);
  if (event.lasts === undefined || length === undefined) return;
  if (length <= 0) {
    reading.problems.add(event.lasts.place, `a ${event.shape} must be longer than 0 s`);
  } else if (at !== undefined && lasts !== undefined && at + length > lasts) {
    reading.problems.add(
      event.lasts.place,
      `this ${event.shape} ends at ${at + length} s, after the scenario, which lasts ${lasts} s`,
    );
  }
}
