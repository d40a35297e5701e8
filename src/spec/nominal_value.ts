import { evaluateExpression } from './evaluate_expression.js';
import type { Names } from './names.js';
import type { Expression } from './spec.js';

/**
 * The value of an amount or time of a scenario with every parameter at its nominal value, SI; undefined where it is not
 * known because something in it is wrong.
 */
export function nominalValue(of: Expression, names: Names): number | undefined {
  const value = evaluateExpression(of, (name) => names.entries.get(name)?.value ?? Number.NaN);
  return Number.isNaN(value) ? undefined : value;
}
