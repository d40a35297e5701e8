import { type FunctionDescription, functions } from '../../src/spec/functions.js';
import { type UnitSymbol, unitSymbols } from '../../src/spec/unit_table.js';

/** The table of units for the reference. */
export function unitTable(): string {
  const rows = unitSymbols.map(
    (symbol) => `| \`${symbol.symbol}\` | ${symbol.meaning} | ${takesPrefix(symbol)} |`,
  );
  const own = [
    '| `dB` | decibel, of an amplitude ratio; behind a number only |  |',
    '| `degC` | degree Celsius, from 273.15 K; behind a number only |  |',
  ];
  return ['| symbol | unit | prefixes |', '|---|---|---|', ...rows, ...own].join('\n');
}

function takesPrefix({ prefixed }: UnitSymbol): string {
  return prefixed ? 'yes' : '';
}

/** The table of functions for the reference. */
export function functionTable(): string {
  const rows = functions.map((known) => `| \`${shape(known)}\` | ${known.meaning} | ${rule(known)} |`);
  return ['| function | gives | dimensions |', '|---|---|---|', ...rows].join('\n');
}

function shape({ name, least, most }: FunctionDescription): string {
  if (name === 'if') return 'if(condition, a, b)';
  const given = ['a', 'b', 'c'].slice(0, least).join(', ');
  return most > least ? `${name}(${given}, …)` : `${name}(x)`;
}

function rule(known: FunctionDescription): string {
  return {
    plain: 'plain numbers',
    keep: 'as x',
    root: 'the root of that of x',
    sign: 'any; gives a plain number',
    same: 'all of one dimension',
    choice: 'a and b of one dimension',
  }[known.rule];
}

/** Changes of the example, and the lines that they give: the reference shows them. */
export const mistakes: [from: string, to: string][] = [
  ['spread: 20 %', 'spred: 20 %'],
  ['torque + gust', 'torque + speed'],
  ['filter: 8 ms', 'filter: 8 m'],
  ['target - encoder', 'target - angle'],
  ['sum_by: backward', 'sum_by: backwards'],
  ['lasts: 4 s', 'lasts: 3 s'],
  ['measure: overshoot', 'measure: overshot'],
  ['at_most: 30 mrad', 'at_most: 30 mm'],
  ['at_least: 0.5', 'at_least: 6 dB'],
];
