import type { Distribution, Expression, ParameterDefinition } from '../../src/spec/spec.js';

export const place = { file: 'a.pawl.yaml', line: 1, column: 1 };
const plain = { text: '', dimension: [0, 0, 0, 0, 0, 0, 0, 0], scale: 1 };

/** A parameter between bounds, its nominal value in the middle unless given. */
export function parameter(
  name: string,
  low: number,
  high: number,
  changes: Partial<ParameterDefinition> = {},
): ParameterDefinition {
  return { name, place, unit: plain, low, high, nominal: (low + high) / 2, ...changes };
}

/** So many parameters x0, x1 … from -1 to 1: their moves are their values. */
export function unitBox(size: number): ParameterDefinition[] {
  return Array.from({ length: size }, (_, i) => parameter(`x${i}`, -1, 1));
}

export function spread(low: number, high: number, distribution: Distribution, nominal?: number) {
  return parameter('p', low, high, { distribution, ...(nominal === undefined ? {} : { nominal }) });
}

export const number = (value: number): Expression => ({ kind: 'number', value, place });
export const name = (of: string): Expression => ({
  kind: 'name',
  role: 'parameter',
  name: of,
  index: undefined,
  place,
});
export const operation = (
  left: Expression,
  operator: Extract<Expression, { kind: 'operation' }>['operator'],
  right: Expression,
): Expression => ({ kind: 'operation', operator, left, right, place });
