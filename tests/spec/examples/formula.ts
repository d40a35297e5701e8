/** How a formula of the page is written in JavaScript, which works it out without any code of ours. */
const written: readonly (readonly [RegExp, string])[] = [
  [/·/g, '*'],
  [/−/g, '-'],
  [/√\(/g, 'sqrt('],
  [/\^/g, '**'],
  [/π/g, 'PI'],
  [/\be\b/g, 'E'],
  [/\bln\b/g, 'log'],
  [/\barctan\b/g, 'atan'],
];

const names = Object.getOwnPropertyNames(Math).filter((name) => name !== 'constructor');

/**
 * The value of a formula: numbers, `+ − · / ^`, parentheses, `√(…)`, `e`, `π`, `ln`, and the functions sin, cos, tan, asin, acos,
 * atan, sinh, tanh, abs, log10, max.
 * @throws Error where it is none.
 */
export function valueOfFormula(formula: string): number {
  const text = written.reduce((so, [from, to]) => so.replace(from, to), formula);
  const value: unknown = new Function(...names, `'use strict'; return (${text});`)(
    ...names.map((name) => Reflect.get(Math, name)),
  );
  if (typeof value === 'number' && Number.isFinite(value)) return value;
  throw new Error(`\`${formula}\` has no value`);
}
