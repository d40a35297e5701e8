import type { Expression, Operator } from '../spec/spec.js';
import type { TargetArithmetic } from './arithmetic.js';
import type { Node, OperationName } from './graph.js';

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

/** Turns a checked expression into a node of the graph, each operation as the target computes it. */
export function lower(expression: Expression, around: Surroundings): Node {
  const { arithmetic } = around;
  switch (expression.kind) {
    case 'number':
      return arithmetic.number(expression.value);
    case 'name':
      return around.name(expression);
    case 'negate':
      return arithmetic.apply('negate', lower(expression.of, around));
    case 'operation': {
      const left = lower(expression.left, around);
      const right = lower(expression.right, around);
      if (expression.operator === '>') return arithmetic.apply('less', right, left);
      if (expression.operator === '>=') return arithmetic.apply('less_or_equal', right, left);
      return arithmetic.apply(operatorNames[expression.operator], left, right);
    }
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
