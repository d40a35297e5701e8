import type { Expression } from '../spec/spec.js';
import type { Statement } from '../spec/statement.js';
import { type Curve, endOf, scaled } from './curve.js';
import { constantLike, largerOf, largestSoFar, smallerOf, sumOf } from './curve_arithmetic.js';
import { largest, smallest } from './extremes.js';
import { slidingLargest, slidingSmallest } from './sliding_extremes.js';

/** Where a statement gets its values from; SI. */
export interface StatementSources {
  signal: (name: string) => Curve;
  parameter: (name: string) => number;
}

/**
 * By how much a statement holds (or, when negative, fails) at the start of the scenario, in units of the comparisons' scales:
 * comparisons give the distance to equality, `all_of` and `throughout` take the smallest, `one_of` and `at_some_time` the
 * largest (robustness degree; Fainekos and Pappas 2009, Donzé and Maler 2010). A window that reaches beyond the end of the
 * scenario ends there.
 * @returns not-a-number where a signal is none, or a window begins after the end.
 */
export function marginAtStart(statement: Statement, sources: StatementSources): number {
  const inner = (of: Statement): number => marginAtStart(of, sources);
  switch (statement.kind) {
    case 'comparison':
      return marginOverTime(statement, sources).points[0];
    case 'throughout':
      return overWindow(statement, sources, smallest);
    case 'at_some_time':
      return overWindow(statement, sources, largest);
    case 'holds_up_to':
      return upToMargin(statement, sources);
    case 'when':
      return Math.max(-inner(statement.when), inner(statement.holds));
    case 'all_of':
      return Math.min(...statement.statements.map(inner));
    case 'one_of':
      return Math.max(...statement.statements.map(inner));
  }
}

function overWindow(
  { that, from, to }: Extract<Statement, { that: Statement }>,
  sources: StatementSources,
  extreme: typeof largest,
): number {
  const curve = marginOverTime(that, sources);
  return from < endOf(curve)
    ? extreme(curve, from, Math.min(to ?? endOf(curve), endOf(curve))).value
    : Number.NaN;
}

/** The largest, over t in the window, of the smaller of: `upTo` at t, and the smallest of `holds` up to t. */
function upToMargin(
  { holds, upTo, from, to }: Extract<Statement, { kind: 'holds_up_to' }>,
  sources: StatementSources,
): number {
  const lowestSoFar = scaled(largestSoFar(scaled(marginOverTime(holds, sources), -1)), -1);
  const both = smallerOf(marginOverTime(upTo, sources), lowestSoFar);
  return from < endOf(both)
    ? largest(both, from, Math.min(to ?? endOf(both), endOf(both))).value
    : Number.NaN;
}

/** The margin of a statement looked at at every time of the scenario. */
function marginOverTime(statement: Statement, sources: StatementSources): Curve {
  const inner = (of: Statement): Curve => marginOverTime(of, sources);
  switch (statement.kind) {
    case 'comparison': {
      const margin = curveOf(statement.margin, sources);
      if (typeof margin === 'number') throw new Error('a comparison without a signal passed the spec reader');
      return scaled(margin, 1 / statement.scale);
    }
    case 'throughout':
    case 'at_some_time': {
      const curve = inner(statement.that);
      const to = statement.to ?? endOf(curve);
      const sliding = statement.kind === 'throughout' ? slidingSmallest : slidingLargest;
      return statement.from < endOf(curve)
        ? sliding(curve, statement.from, to)
        : constantLike(curve, Number.NaN);
    }
    case 'holds_up_to':
      throw new Error('holds_up_to inside a statement at many times passed the spec reader');
    case 'when':
      return largerOf(scaled(inner(statement.when), -1), inner(statement.holds));
    case 'all_of':
      return statement.statements.map(inner).reduce(smallerOf);
    case 'one_of':
      return statement.statements.map(inner).reduce(largerOf);
  }
}

/** A combination of signals as a curve, or a number where no signal stands in it. */
function curveOf(of: Expression, sources: StatementSources): Curve | number {
  switch (of.kind) {
    case 'number':
      return of.value;
    case 'name':
      return of.role === 'parameter' ? sources.parameter(of.name) : sources.signal(of.name);
    case 'negate':
      return times(curveOf(of.of, sources), -1);
    case 'operation':
      return operated(of.operator, curveOf(of.left, sources), curveOf(of.right, sources));
    case 'call':
      return called(
        of.name,
        of.arguments.map((argument) => curveOf(argument, sources)),
      );
    case 'before':
      throw new Error('before() in a statement passed the spec reader');
  }
}

function operated(operator: string, left: Curve | number, right: Curve | number): Curve | number {
  if (operator === '+') return plus(left, right, 1);
  if (operator === '-') return plus(left, right, -1);
  if (typeof right === 'number') {
    if (operator === '^' && typeof left === 'number') return left ** right;
    return times(left, operator === '/' ? 1 / right : right);
  }
  if (typeof left === 'number' && operator === '*') return times(right, left);
  throw new Error(`'${operator}' between signals of a statement passed the spec reader`);
}

function called(name: string, of: (Curve | number)[]): Curve | number {
  const larger = (a: Curve | number, b: Curve | number): Curve | number => {
    if (typeof a === 'number' && typeof b === 'number') return Math.max(a, b);
    const like = (typeof a === 'number' ? b : a) as Curve;
    const full = (one: Curve | number): Curve => (typeof one === 'number' ? constantLike(like, one) : one);
    return largerOf(full(a), full(b));
  };
  switch (name) {
    case 'abs':
      return larger(of[0], times(of[0], -1));
    case 'max':
      return of.reduce(larger);
    case 'min':
      return times(of.map((one) => times(one, -1)).reduce(larger), -1);
    default:
      throw new Error(`'${name}' of a signal of a statement passed the spec reader`);
  }
}

function times(of: Curve | number, factor: number): Curve | number {
  return typeof of === 'number' ? factor * of : scaled(of, factor);
}

function plus(left: Curve | number, right: Curve | number, factor: number): Curve | number {
  if (typeof left === 'number') {
    if (typeof right === 'number') return left + factor * right;
    return sumOf(constantLike(right, left), right, factor);
  }
  return sumOf(left, typeof right === 'number' ? constantLike(left, right) : right, factor);
}
