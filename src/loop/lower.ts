import type { Expression, Operator } from '../spec/spec.js';
import type { TargetArithmetic } from './arithmetic.js';
import type { Node, OperationName } from './graph.js';
import { placed, type Term } from './number_rules.js';

const operatorNames: Record<Exclude<Operator, '>' | '>='>, OperationName> = {
  '+': 'add',
  '-': 'subtract',
  '*': 'multiply',
  '/': 'divide',
  '^': 'power',
  '<': 'less',
  '<=': 'less_or_equal',
  '==': 'equal',
  '!=': 'unequal',
};

/** What an expression's names mean where it stands. */
export interface Surroundings {
  arithmetic: TargetArithmetic;
  name: (use: Extract<Expression, { kind: 'name' }>) => Node;
  /** The expression's value at the previous sampling instant. */
  before: (of: Expression) => Node;
}

/**
 * Turns a checked expression into a node of the graph, each operation as the target computes it.
 * @throws {LoopError} where the target's number format does not have an operation or a number.
 */
export function lower(expression: Expression, around: Surroundings): Node {
  return placed(expression.place, () => lowered(expression, around));
}

function lowered(expression: Expression, around: Surroundings): Node {
  const { arithmetic } = around;
  switch (expression.kind) {
    case 'number':
      return arithmetic.number(expression.value);
    case 'name':
      return around.name(expression);
    case 'negate':
      return arithmetic.apply('negate', lower(expression.of, around));
    case 'operation':
      return isSum(expression) ? arithmetic.sum(termsOf(expression, around)) : operation(expression, around);
    case 'call': {
      const given = expression.arguments.map((argument) => lower(argument, around));
      if (expression.name === 'if') return arithmetic.apply('choose', ...given);
      const name = expression.name as OperationName;
      if (name === 'min' || name === 'max') return given.reduce((a, b) => arithmetic.apply(name, a, b));
      return arithmetic.apply(name, ...given);
    }
    case 'before':
      return around.before(expression.of);
  }
}

type Operation = Extract<Expression, { kind: 'operation' }>;
type Sum = Operation & { operator: '+' | '-' };

function operation(expression: Operation, around: Surroundings): Node {
  const { arithmetic } = around;
  const left = lower(expression.left, around);
  const right = lower(expression.right, around);
  if (expression.operator === '>') return arithmetic.apply('less', right, left);
  if (expression.operator === '>=') return arithmetic.apply('less_or_equal', right, left);
  return arithmetic.apply(operatorNames[expression.operator], left, right);
}

function isSum(expression: Expression): expression is Sum {
  return expression.kind === 'operation' && (expression.operator === '+' || expression.operator === '-');
}

/** The terms of a sum in the order written; parentheses on the right of a sign close a sum of their own. */
function termsOf(expression: Expression, around: Surroundings): Term[] {
  if (!isSum(expression)) return [termOf(expression, false, around)];
  const last = termOf(expression.right, expression.operator === '-', around);
  return [...termsOf(expression.left, around), last];
}

function termOf(expression: Expression, minus: boolean, around: Surroundings): Term {
  const [of, turned] = expression.kind === 'negate' ? [expression.of, true] : [expression, false];
  if (of.kind !== 'operation' || of.operator !== '*') return { value: lower(expression, around), minus };
  return { factor: lower(of.left, around), value: lower(of.right, around), minus: minus !== turned };
}
