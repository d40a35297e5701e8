import type { CheckContext } from './check_context.js';
import { check } from './check_expression.js';
import { isPlain, sameDimension } from './dimension.js';
import { formatMismatch } from './format_dimension.js';
import type { Room } from './names.js';
import { parseExpression } from './parse_expression.js';
import type { Problems } from './problems.js';
import { missing, type Reading } from './reading.js';
import { type Checked, toScale } from './scales.js';
import type { Dimension, Expression, Range } from './spec.js';
import type { Syntax } from './syntax.js';
import type { ListTree, TextTree, Tree } from './tree.js';
import { prefixHint } from './unit_hints.js';

/** Where an expression stands and what it must come out as. */
export interface Slot {
  /** Undefined where it is not known, because something it follows from is wrong. */
  dimension: Dimension | undefined;
  /** SI value of one unit of the slot; 1 in rooms that compute in SI. */
  scale: number;
  /** For errors: "`gain`". */
  what: string;
  /** A size and not a point on its scale: a temperature in degC is refused. */
  size?: boolean;
  /** What a number must be that stands here by itself; parameters have bounds of their own. */
  sign?: 'above_zero' | 'not_negative';
  /** For errors of dimension: where the dimension comes from. */
  since?: string;
}

/** A room and whether conversions may be inserted in it. */
export interface Surroundings {
  room: Room;
  convertsFreely: boolean;
}

/** An expression that was read and checked, before it is fitted to a slot. */
export interface Free extends Checked {
  /** The expression is a coefficient without a unit and nothing else: it takes the slot's. */
  adapts: boolean;
  /** It is a temperature in degC and nothing else. */
  celsius: boolean;
  text: TextTree;
  context: CheckContext;
}

/** Reads an expression for a slot; undefined where none is written. A wrong one is reported and stands as missing. */
export function readExpression(
  tree: Tree | undefined,
  slot: Slot,
  surroundings: Surroundings,
  reading: Reading,
): Expression | undefined {
  if (tree === undefined) return undefined;
  const free = readFree(tree, surroundings, reading);
  return free === undefined ? missing(tree.place) : fit(free, slot);
}

/** Reads and checks an expression whose dimension is what it comes out as. */
export function readFree(
  tree: Tree | undefined,
  surroundings: Surroundings,
  reading: Reading,
): Free | undefined {
  if (tree === undefined || tree.kind !== 'text') {
    return undefined;
  }
  const syntax = parseExpression(tree.source);
  if (syntax.kind === 'fault') {
    reading.problems.add(tree.placeAt(syntax.at), syntax.message);
    reading.names.incomplete = true;
    return undefined;
  }
  const context: CheckContext = {
    ...surroundings,
    names: reading.names,
    problems: reading.problems,
    placeAt: tree.placeAt,
  };
  return {
    ...check(syntax, context),
    adapts: isAdapting(syntax, reading),
    celsius: isCelsius(syntax),
    text: tree,
    context,
  };
}

/** Brings a checked expression to its slot, or reports both dimensions. */
export function fit(free: Free, slot: Slot): Expression {
  const { dimension, expression, context } = free;
  if (dimension === undefined || slot.dimension === undefined) return missing(expression.place);
  if (free.adapts) return expression;
  if (free.celsius && slot.size) {
    context.problems.add(
      startOf(free.text),
      `${slot.what} is a difference of temperatures, which is in K; degC is a temperature`,
    );
  }
  if (!free.zero && !sameDimension(dimension, slot.dimension)) {
    context.problems.add(startOf(free.text), mismatch(free, dimension, slot, slot.dimension));
    return missing(expression.place);
  }
  const fitted = toScale(free, slot.scale, expression.place, context).expression;
  checkSign(fitted, slot, free.text, context.problems);
  return fitted;
}

/** Reports a number whose sign makes no sense where it stands. */
export function checkSign(
  of: Expression,
  { what, sign }: Pick<Slot, 'what' | 'sign'>,
  text: TextTree,
  problems: Problems,
): void {
  const value = numberOf(of);
  if (value === undefined || sign === undefined || value > 0 || (value === 0 && sign === 'not_negative'))
    return;
  const wanted = sign === 'above_zero' ? 'above 0' : '0 or more';
  problems.add(startOf(text), `${what} must be ${wanted}, but is ${text.source.trim()}`);
}

/** Reads `[low, high]`. */
export function readRange(
  tree: Tree | undefined,
  slot: Slot,
  surroundings: Surroundings,
  reading: Reading,
): Range | undefined {
  if (tree?.kind !== 'list' || tree.items.length !== 2) return undefined;
  const [low, high] = tree.items.map((item) => readExpression(item, slot, surroundings, reading)!);
  if (low.kind === 'number' && high.kind === 'number' && low.value >= high.value) reportOrder(tree, reading);
  const bounds = [numberOf(low), numberOf(high)];
  if (bounds[0] !== undefined && bounds[1] !== undefined && bounds[0] >= bounds[1])
    reportOrder(tree, reading);
  return { low, high };
}

function reportOrder(tree: ListTree, reading: Reading): void {
  reading.problems.add(tree.place, 'the lower bound comes first and must be below the upper one');
}

/** The value of what is a number and nothing else. */
export function numberOf(of: Expression): number | undefined {
  if (of.kind === 'number') return Number.isNaN(of.value) ? undefined : of.value;
  if (of.kind !== 'negate') return undefined;
  const inner = numberOf(of.of);
  return inner === undefined ? undefined : -inner;
}

function mismatch(free: Free, found: Dimension, slot: Slot, expected: Dimension): string {
  const hint = free.withUnit ? prefixHint(free.withUnit, expected) : '';
  const cure = hint === '' && isPlain(found) && usesBareCoefficient(free.expression) ? coefficientHint : hint;
  const since = cure === '' && slot.since !== undefined ? `; ${slot.since}` : '';
  return `${slot.what} ${formatMismatch(found, expected)}${cure}${since}`;
}

const coefficientHint = '; a coefficient without `unit:` counts as a plain number in an expression';

function usesBareCoefficient(expression: Expression): boolean {
  switch (expression.kind) {
    case 'name':
      return expression.role === 'coefficient';
    case 'negate':
    case 'before':
      return usesBareCoefficient(expression.of);
    case 'operation':
      return usesBareCoefficient(expression.left) || usesBareCoefficient(expression.right);
    default:
      return false;
  }
}

function isCelsius(syntax: Syntax): boolean {
  return syntax.kind === 'quantity' && syntax.unit.law === 'celsius';
}

function isAdapting(syntax: Syntax, reading: Reading): boolean {
  return syntax.kind === 'name' && reading.names.entries.get(syntax.name)?.adapts === true;
}

function startOf(text: TextTree) {
  return text.placeAt(Math.max(0, text.source.search(/\S/)));
}
