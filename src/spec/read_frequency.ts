import { frequencyDimension, rateDimension, sameDimension, timeDimension } from './dimension.js';
import { formatDimension } from './format_dimension.js';
import { checkSign, type Free, readFree, type Surroundings } from './read_expression.js';
import { missing, type Reading } from './reading.js';
import { inverted, multiplied } from './scales.js';
import type { Dimension, Expression } from './spec.js';
import type { Tree } from './tree.js';
import { prefixHint } from './unit_hints.js';

/** How each accepted dimension becomes what the slot needs; `by` carries the scale of the expression's unit. */
type Turn = (of: Free, scale: number) => Expression;

const asIs: Turn = (of, scale) => of.adapt?.(scale) ?? multiplied(of.expression, scale, of.expression.place);
const inverse: Turn = (of, scale) => inverted(of.expression, scale, of.expression.place);
const timesTwoPi: Turn = (of, scale) => asIs(of, 2 * Math.PI * scale);
const inverseOfTwoPi: Turn = (of, scale) => inverse(of, 2 * Math.PI * scale);

/** Reads a time constant in s: a time, or a corner in Hz (1/(2π f)) or rad/s (1/ω). */
export function readTimeConstant(
  tree: Tree | undefined,
  what: string,
  around: Surroundings,
  reading: Reading,
) {
  const turns: [Dimension, Turn][] = [
    [timeDimension, asIs],
    [frequencyDimension, inverseOfTwoPi],
    [rateDimension, inverse],
  ];
  const read = readTurned(tree, `${what} must be a time, or a corner in Hz or rad/s`, turns, around, reading);
  return notNegative(read, what, tree, reading);
}

/** Reads a corner in rad/s: an angular frequency, or a frequency in Hz (2π f). */
export function readCorner(tree: Tree | undefined, what: string, around: Surroundings, reading: Reading) {
  const turns: [Dimension, Turn][] = [
    [rateDimension, asIs],
    [frequencyDimension, timesTwoPi],
  ];
  const read = readTurned(tree, `${what} must be a corner in Hz or rad/s`, turns, around, reading);
  return notNegative(read, what, tree, reading);
}

function notNegative(
  read: Expression | undefined,
  what: string,
  tree: Tree | undefined,
  reading: Reading,
): Expression | undefined {
  if (read && tree?.kind === 'text') checkSign(read, { what, sign: 'not_negative' }, tree, reading.problems);
  return read;
}

/** Reads a sampling period in s: a time, or a rate in Hz (1/f). */
export function readPeriod(tree: Tree | undefined, what: string, around: Surroundings, reading: Reading) {
  const turns: [Dimension, Turn][] = [
    [timeDimension, asIs],
    [frequencyDimension, inverse],
  ];
  return readTurned(tree, `${what} must be a time, or a rate in Hz`, turns, around, reading);
}

/** Reads a frequency in Hz: a frequency, or the time of its period (1/T). */
export function readFrequency(tree: Tree | undefined, what: string, around: Surroundings, reading: Reading) {
  const turns: [Dimension, Turn][] = [
    [frequencyDimension, asIs],
    [timeDimension, inverse],
  ];
  return readTurned(tree, `${what} must be a frequency in Hz, or its period`, turns, around, reading);
}

/** A coefficient without a unit takes the first of the accepted ones. */
function readTurned(
  tree: Tree | undefined,
  expected: string,
  turns: [Dimension, Turn][],
  around: Surroundings,
  reading: Reading,
): Expression | undefined {
  if (tree === undefined) return undefined;
  // These are turned once, before the controller runs, and so cost its arithmetic nothing.
  const free = readFree(tree, { ...around, convertsFreely: true }, reading);
  if (free?.dimension === undefined) return missing(tree.place);
  if (free.adapts || free.zero) return free.expression;
  const { dimension } = free;
  const turn = turns.find(([accepted]) => sameDimension(accepted, dimension))?.[1];
  if (turn !== undefined) return folded(turn(free, free.scale));
  const hint = free.withUnit ? prefixHint(free.withUnit, turns[0][0]) : '';
  reading.problems.add(tree.place, `${expected}, but this is ${formatDimension(dimension)}${hint}`);
  return missing(tree.place);
}

/** What is a number already stays one. */
function folded(of: Expression): Expression {
  if (of.kind !== 'operation' || of.left.kind !== 'number') return of;
  const right = folded(of.right);
  if (right.kind !== 'number') return of;
  const value = of.operator === '*' ? of.left.value * right.value : of.left.value / right.value;
  return { kind: 'number', value, place: of.place };
}
