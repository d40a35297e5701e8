/**
 * How a function treats dimensions.
 * `plain`: takes plain numbers, gives one. `keep`: gives what it takes. `root`: halves the exponents.
 * `sign`: takes anything, gives a plain number. `same`: takes quantities of one dimension and gives one of it.
 * `choice`: a condition (a plain number) and two quantities of one dimension.
 */
export type DimensionRule = 'plain' | 'keep' | 'root' | 'sign' | 'same' | 'choice';

/** A function that expressions may call. */
export interface FunctionDescription {
  name: string;
  /** Fewest and most arguments. */
  least: number;
  most: number;
  rule: DimensionRule;
  meaning: string;
}

function of(
  name: string,
  rule: DimensionRule,
  meaning: string,
  least = 1,
  most = least,
): FunctionDescription {
  return { name, least, most, rule, meaning };
}

/** The published list. Angles are in radians; a condition holds when it is not 0. */
export const functions: readonly FunctionDescription[] = [
  of('abs', 'keep', 'size without sign'),
  of('sign', 'sign', '-1, 0 or 1'),
  of('sqrt', 'root', 'square root'),
  of('exp', 'plain', 'e to the power'),
  of('ln', 'plain', 'natural logarithm'),
  of('sin', 'plain', 'sine'),
  of('cos', 'plain', 'cosine'),
  of('tan', 'plain', 'tangent'),
  of('asin', 'plain', 'angle with this sine, from -π/2 to π/2'),
  of('acos', 'plain', 'angle with this cosine, from 0 to π'),
  of('atan', 'plain', 'angle with this tangent, from -π/2 to π/2'),
  of('sinh', 'plain', 'hyperbolic sine'),
  of('cosh', 'plain', 'hyperbolic cosine'),
  of('tanh', 'plain', 'hyperbolic tangent'),
  of('min', 'same', 'the smallest', 2, 16),
  of('max', 'same', 'the largest', 2, 16),
  of('floor', 'plain', 'next whole number below'),
  of('ceil', 'plain', 'next whole number above'),
  of('round', 'plain', 'nearest whole number, halves away from zero'),
  of('hypot', 'same', 'square root of the sum of squares', 2, 16),
  of('if', 'choice', 'the second where the first is not 0, else the third', 3),
];

const byName = new Map(functions.map((description) => [description.name, description]));

/** The function of this name, if there is one. */
export function functionNamed(name: string): FunctionDescription | undefined {
  return byName.get(name);
}

/** Whether a name may not be given to anything: functions, `before`, `time`, and what every script object has. */
export function isReserved(name: string): boolean {
  return byName.has(name) || name === 'before' || name === 'time' || name in {} || name === 'prototype';
}
