import type { CheckContext } from './check_context.js';
import { check } from './check_expression.js';
import { isPlain, sameDimension } from './dimension.js';
import { formatDimension } from './format_dimension.js';
import type { Room } from './names.js';
import { parseExpression } from './parse_expression.js';
import type { Reading } from './reading.js';
import { type Checked, toOneScale } from './scales.js';
import type { Dimension, Expression, Operator, Place } from './spec.js';
import { type Statement, signalsOfExpression } from './statement.js';
import type { TextTree } from './tree.js';

/** What counts as one of headroom, for comparisons of its dimension; SI. */
export interface ScaleGiven {
  value: number;
  dimension: Dimension;
}

/** What statements over time compare: everything that has a trace, in SI. */
const statementRoom: Room = {
  sees: ['plant signal', 'controller signal', 'sensor', 'actuator', 'input', 'parameter', 'constant'],
  words: 'a statement',
  si: true,
  mayLookBack: false,
};

/** Reads a comparison of signals, such as `abs(angle - target) < 2 mrad`; undefined where it is wrong (then reported). */
export function readComparison(
  tree: TextTree,
  scales: readonly ScaleGiven[],
  reading: Reading,
): Statement | undefined {
  const parts = partsOf(tree.source);
  if (parts === undefined) {
    reading.problems.add(
      tree.place,
      'a statement compares signals: expected one of <, <=, >, >= at its outside, once',
    );
    return undefined;
  }
  const sides = [readSide(parts.left, tree, reading), readSide(parts.right, tree, reading)];
  const [first, second] = sides;
  if (first === undefined || second === undefined) return undefined;
  const [left, right] = toOneScale(first.checked, second.checked, parts.operator, tree.place, first.context);
  const [greater, smaller] = parts.operator.startsWith('<') ? [right, left] : [left, right];
  const dimension = left.zero ? right.dimension : left.dimension;
  if (dimension === undefined || !followable(left, right, tree, reading)) return undefined;
  const scale = scaleFor(dimension, scales, tree, reading);
  if (scale === undefined) return undefined;
  const margin: Expression = {
    kind: 'operation',
    operator: '-',
    left: greater.expression,
    right: smaller.expression,
    place: tree.place,
  };
  const asWritten = tree.source.trim().replace(/\s+/g, ' ');
  return { kind: 'comparison', margin, scale, asWritten, place: tree.place };
}

/** A text and where it begins in the whole. */
interface Side {
  text: string;
  from: number;
}

/** The two sides of the one comparison outside all parentheses; each may then be a quantity such as `2 mrad`. */
function partsOf(source: string): { left: Side; operator: Operator; right: Side } | undefined {
  const found: { at: number; operator: string }[] = [];
  let depth = 0;
  for (let at = 0; at < source.length; at++) {
    if (source[at] === '(') depth++;
    if (source[at] === ')') depth--;
    if (depth > 0 || (source[at] !== '<' && source[at] !== '>')) continue;
    const operator = source[at + 1] === '=' ? source.slice(at, at + 2) : source[at];
    found.push({ at, operator });
    at += operator.length - 1;
  }
  if (found.length !== 1) return undefined;
  const [{ at, operator }] = found;
  const after = at + operator.length;
  return {
    left: { text: source.slice(0, at), from: 0 },
    operator: operator as Operator,
    right: { text: source.slice(after), from: after },
  };
}

function readSide(
  { text, from }: Side,
  tree: TextTree,
  { names, problems }: Reading,
): { checked: Checked; context: CheckContext } | undefined {
  const placeAt = (at: number): Place => tree.placeAt(from + at);
  const syntax = parseExpression(text);
  if (syntax.kind === 'fault') {
    problems.add(placeAt(syntax.at), syntax.message);
    names.incomplete = true;
    return undefined;
  }
  const context: CheckContext = { room: statementRoom, convertsFreely: true, names, problems, placeAt };
  return { checked: check(syntax, context), context };
}

function scaleFor(
  dimension: Dimension,
  scales: readonly ScaleGiven[],
  tree: TextTree,
  reading: Reading,
): number | undefined {
  const given = scales.findLast((scale) => sameDimension(scale.dimension, dimension));
  if (given !== undefined) return given.value;
  const unit = isPlain(dimension) ? 'a plain number' : formatDimension(dimension);
  reading.problems.add(
    tree.place,
    `this comparison needs \`scale:\`, ${unit} that counts as a headroom of 100 %; it stands beside it or further out`,
  );
  return undefined;
}

function followable(left: Checked, right: Checked, tree: TextTree, reading: Reading): boolean {
  const signals = [left, right].flatMap(({ expression }) => signalsOfExpression(expression));
  if (signals.length === 0) {
    reading.problems.add(
      tree.place,
      'this comparison has no signal in it, so that it says nothing over time',
    );
    return false;
  }
  const fault = [left, right].map(({ expression }) => faultOf(expression)).find((one) => one !== undefined);
  if (fault === undefined) return true;
  reading.problems.add(
    fault.place,
    'a statement adds, subtracts and scales signals, and takes abs, min and max of them; anything else is a signal of its own in `plant:`',
  );
  return false;
}

/** The part of an expression that is not built from signals by adding, scaling, abs, min and max. */
function faultOf(of: Expression): Expression | undefined {
  if (signalsOfExpression(of).length === 0) return undefined;
  switch (of.kind) {
    case 'negate':
      return faultOf(of.of);
    case 'operation': {
      const moving = [of.left, of.right].filter((side) => signalsOfExpression(side).length > 0);
      const adds = of.operator === '+' || of.operator === '-';
      const scales =
        moving.length === 1 && (of.operator === '*' || (of.operator === '/' && moving[0] === of.left));
      return adds || scales ? moving.map(faultOf).find((fault) => fault !== undefined) : of;
    }
    case 'call':
      if (!['abs', 'min', 'max'].includes(of.name)) return of;
      return of.arguments.map(faultOf).find((fault) => fault !== undefined);
    default:
      return undefined;
  }
}
