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
 * @param where further names in it, with their formulas.
 * @throws Error where it has none.
 */
export function valueOfFormula(formula: string, where: Record<string, string> = {}): number {
  const own = Object.entries(where).map(([name, text]): [string, unknown] => [name, valueOfFormula(text)]);
  const known = [...names.map((name): [string, unknown] => [name, Reflect.get(Math, name)]), ...own];
  const text = written.reduce((so, [from, to]) => so.replace(from, to), formula);
  const form = new Function(...known.map(([name]) => name), `'use strict'; return (${text});`);
  const value: unknown = form(...known.map(([, one]) => one));
  if (typeof value === 'number' && Number.isFinite(value)) return value;
  throw new Error(`\`${formula}\` has no value`);
}
