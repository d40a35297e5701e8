import { describe, expect, it } from 'vitest';
import { vocabulary } from '../../src/cli/vocabulary.js';
import { PlantEvaluator } from '../../src/measure/evaluate_plant.js';
import { formatSpecError, loadSpec } from '../../src/spec/index.js';

const log = `# bench, 12 March
t;push;wind
0;0;1
500;2;1

1500;2;3
2000;-1;3
`;
const files: Record<string, string> = {
  'log.csv': log,
  'curve.csv': '﻿x, y\n0, 0\n1, 10\n3, 20\n',
  'corridor.csv': 't,low\n0,-0.5\n2,3.1\n',
  'empty.csv': 'a,b\n',
  'ragged.csv': 'a,b\n1,2\n3\n',
};

function spec(drive: string, extra = ''): string {
  return `pawl: 1
loop: Driven by a log
inputs: { drive: { unit: V } }
plant:
  y: { value: drive, unit: V }
  sum: { integral: drive, unit: V*s }
  curve: { table: { points: { file: curve.csv, column: x, unit: V*s }, values: { file: curve.csv, column: y, unit: A } }, of: sum, unit: A }
scenarios: { run: { lasts: 4 s, inputs: { drive: ${drive} } } }
requirements:
  - { name: top, measure: largest_value, of: y, in: run, at_most: 9 V }
  - { name: sum, measure: largest_value, of: sum, in: run, at_most: 9 V*s }
  - { name: curve, measure: largest_value, of: curve, in: run, at_most: 90 A }
  - { name: clear, measure: corridor_clearance, of: sum, lower: { file: corridor.csv, columns: [t, low], units: [s, V*s] }, in: run, at_least: -9 V*s }
${extra}`;
}

const load = (text: string): ReturnType<typeof loadSpec> =>
  loadSpec(text, 'axis.pawl.yaml', vocabulary, { read: (path) => files[path] });

function errors(text: string): string[] {
  const loaded = load(text);
  return loaded.kind === 'errors' ? loaded.errors.map(formatSpecError) : [];
}

const byFile = '{ recorded: { file: log.csv, columns: [t, push], units: [ms, V] }, at: 1 s }';
const inline = '{ recorded: [[0 s, 0 V], [0.5 s, 2 V], [1.5 s, 2 V], [2 s, -1 V]], at: 1 s }';

describe('tables from files', () => {
  it('stand as if they were written in the spec: inputs, tables and corridors', () => {
    const [fromFile, written] = [byFile, inline].map((drive) => {
      const loaded = load(spec(drive));
      if (loaded.kind === 'errors') throw new Error(loaded.errors.map(formatSpecError).join('\n'));
      return new PlantEvaluator(loaded.spec, new Map()).evaluate(new Float64Array(0), 3);
    });
    expect(fromFile).toEqual(written);
    const [top, sum, curve, clear] = fromFile.map((result) => (result as { value: number }).value);
    expect(top).toBeCloseTo(2, 12);
    // The sum is largest where the drive crosses zero, a third of a second after 2.5 s: 0.5 + 2 + 2·(1/3)/2.
    expect(sum).toBeCloseTo(2.5 + 1 / 3, 9);
    expect(curve).toBeCloseTo(10 + (sum - 1) * 5, 9);
    // The lower bound is −0.5 + 1.8·t; the sum is still 0 at 1 s and (t − 1)²·2 up to 1.5 s: closest at 1 + 0.45 s.
    expect(clear).toBeCloseTo(2 * 0.45 ** 2 - (-0.5 + 1.8 * 1.45), 9);
  });

  it('give the line of the file where a value is wrong', () => {
    files['bad.csv'] = 't,u\n0,1\n1,two\n';
    expect(
      errors(spec('{ recorded: { file: bad.csv, columns: [t, u], units: [s, V] }, at: 1 s }'))[0],
    ).toMatch(/^bad\.csv:3:2: /);
    files['back.csv'] = 't,u\n0,1\n2,1\n1,1\n';
    expect(errors(spec('{ recorded: { file: back.csv, columns: [t, u], units: [s, V] }, at: 1 s }'))).toEqual(
      ['back.csv:4:1: the corners of `recorded` come in order of time'],
    );
  });

  const cases: [string, string, RegExp][] = [
    [
      'a file that is not there',
      '{ file: nolog.csv, columns: [t, push] }',
      /`nolog\.csv` cannot be read: there is no file/,
    ],
    ['a file outside', '{ file: ../log.csv, columns: [t, push] }', /`\.\.\/log\.csv` leads outside `\.`/],
    ['an unknown column', '{ file: log.csv, columns: [t, psh] }', /has no column `psh`.*`push`/],
    [
      'too few units',
      '{ file: log.csv, columns: [t, push], units: [ms] }',
      /2 columns have 1 units; expected one for each/,
    ],
    ['no rows', '{ file: empty.csv, columns: [a, b] }', /`empty\.csv` has no rows/],
    ['a ragged table', '{ file: ragged.csv, columns: [a, b] }', /`ragged\.csv` is no table: .*line 3/],
    ['an unknown key', '{ file: log.csv, columns: [t, push], unites: [s, V] }', /no key `unites`/],
  ];
  for (const [name, table, message] of cases) {
    it(`refuse ${name} at its place`, () => {
      const [first, ...more] = errors(spec(`{ recorded: ${table}, at: 1 s }`));
      expect(first).toMatch(message);
      expect(first).toMatch(/^axis\.pawl\.yaml:8:\d+: /);
      expect(more).toEqual([]);
    });
  }
});
