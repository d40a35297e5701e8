import type { Names } from './names.js';
import type { Expression } from './spec.js';

/**
 * The value of an amount or time of a scenario with every parameter at its nominal value; undefined where it is not
 * known while reading (a call, or something wrong).
 */
export function nominalValue(of: Expression, names: Names): number | undefined {
  switch (of.kind) {
    case 'number':
      return Number.isNaN(of.value) ? undefined : of.value;
    case 'name':
      return names.entries.get(of.name)?.value;
    case 'negate': {
      const inner = nominalValue(of.of, names);
      return inner === undefined ? undefined : -inner;
    }
    case 'operation': {
      const [left, right] = [nominalValue(of.left, names), nominalValue(of.right, names)];
      return left === undefined || right === undefined ? undefined : arithmetic(of.operator, left, right);
    }
    default:
      return undefined;
  }
}

function arithmetic(operator: string, left: number, right: number): number | undefined {
  switch (operator) {
    case '+':
      return left + right;
    case '-':
      return left - right;
    case '*':
      return left * right;
    case '/':
      return left / right;
    case '^':
      return left ** right;
    default:
      return undefined;
  }
}
