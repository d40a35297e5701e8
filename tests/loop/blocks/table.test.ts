import { describe, expect, it } from 'vitest';
import { vocabulary } from '../../../src/cli/vocabulary.js';
import { expandLoop } from '../../../src/loop/expand.js';
import { loadSpec } from '../../../src/spec/index.js';
import { resultsOf } from '../measured.js';
import { outputs, responses, stepper } from './law.js';

/** A loop at rest at zero, whose drive goes through a table that the plant or the controller has. */
function loop(valve: string, gain: string, from = ''): string {
  return `
inputs: { wanted: {} }
plant:
  flow: ${valve}
  level: { integral: (flow - 0.5*level)/(1 s) }
sensors: { seen: { of: level } }
controllers:
  law:
    every: 50 ms
    signals: { wish: { value: wanted - seen }, command: ${gain} }
actuators: { drive: { of: command } }
scenarios: { step: { lasts: 5 s, inputs: { wanted: { step: 0.1, at: 1 s } } } }
requirements:
  - { name: margin, measure: gain_margin, at: seen, at_least: 2 }
  - { name: peak, measure: peak_deviation, of: level, to: wanted, in: step, at_most: 1 }
${from}`;
}

describe('a table at rest on one of its points', () => {
  const points = 'points: [-1, 0, 1, 2]';
  const straight = `{ table: { ${points}, values: [-3, 0, 3, 6] }, of: SIGNAL }`;
  const smooth = `{ table: { ${points}, values: [-2, 0, 2, 3], between: cubic }, of: SIGNAL }`;
  const bent = `{ table: { ${points}, values: [-3, 0, 1, 2] }, of: SIGNAL }`;
  const plainValve = '{ value: drive }';
  const plainGain = (factor: number) => `{ value: ${factor}*wish }`;

  it('has the slope of both sides where they agree, in the plant as in a controller', () => {
    const wanted = resultsOf(loop(plainValve, plainGain(3)));
    for (const text of [
      loop(straight.replace('SIGNAL', 'drive'), plainGain(1)),
      loop(plainValve, straight.replace('SIGNAL', 'wish')),
    ]) {
      const found = resultsOf(text);
      for (const name of ['margin', 'peak']) {
        const value = (result: (typeof found)[string]) => (result as { value: number }).value;
        expect(value(found[name])).toBeCloseTo(value(wanted[name]), 9);
      }
    }
    expect(resultsOf(loop(plainValve, smooth.replace('SIGNAL', 'wish'))).margin.kind).toBe('value');
  });

  it('has no margin where the slope changes', () => {
    const found = resultsOf(loop(plainValve, bent.replace('SIGNAL', 'wish')));
    expect(found.margin.kind).toBe('unformed');
    expect(found.peak.kind).toBe('value');
  });
});

describe('a table', () => {
  it('has, in a straight part, the slope of its chord, and in a cubic the slope at its inner points', () => {
    const slopeOf = (between: string, at: number): number => {
      const table = `{ table: { points: [-1, 0, 2], values: [0, 1, 5], between: ${between} }, of: moved }`;
      const signals = [`moved: { value: x + ${at} }`, `out: ${table}`];
      const [[re, im]] = responses({ signals }, [1]);
      expect(im).toBeCloseTo(0, 12);
      return re;
    };
    expect(slopeOf('linear', -0.4)).toBeCloseTo(1, 12);
    expect(slopeOf('linear', 1.3)).toBeCloseTo(2, 12);
    // The weighted harmonic mean of 1 and 2 with weights 5 and 4 (Fritsch and Butland 1984).
    expect(slopeOf('cubic', 0)).toBeCloseTo(9 / (5 / 1 + 4 / 2), 12);
  });

  it('of two signals has values between its corners as a plane through three of them where that is what they are', () => {
    const signals = [
      'out: { table: { points: [0, 1, 4], values: [[1, 3], [3, 5], [9, 11]], second: y, second_points: [0, 2] }, of: x }',
    ];
    const step = stepper({ signals, inputs: { y: '1' } });
    for (const [x, y] of [
      [0.3, 0.5],
      [2.5, 1.9],
      [1, 2],
    ]) {
      expect(step([x, y])[0]).toBeCloseTo(1 + 2 * x + y, 13);
    }
  });

  it('of one point is a constant, and values may be signals', () => {
    expect(outputs({ signals: ['out: { table: { points: [3], values: [7] }, of: x }'] }, [1, 5])).toEqual([
      7, 7,
    ]);
    const moving = ['out: { table: { points: [0, 1], values: [x, 3*x] }, of: x }'];
    expect(outputs({ signals: moving }, [0.5, 2])).toEqual([0.5 + 1 * 0.5, 6]);
  });

  it('takes its points and values from CSV files, in the units that the spec gives', () => {
    const files: Record<string, string> = {
      'gains.csv': '# bench log\nspeed,low,high\n0,1,2\n60,3,4\n120,5,8\n',
    };
    const column = (name: string, unit: string) => `{ file: gains.csv, column: ${name}${unit} }`;
    const controllers = `
inputs: { wanted: { unit: rad/s } }
plant: { back: { value: held*(1 rad/s), unit: rad/s } }
sensors: { seen: { of: back, unit: rpm } }
controllers:
  law:
    every: 1 s
    signals:
      high: { table: { points: ${column('speed', ', unit: rpm')}, values: ${column('high', '')} }, of: seen }
      both: { table: { points: ${column('speed', ', unit: rpm')}, values: { file: gains.csv, columns: [low, high] }, second: seen/wanted, second_points: [0, 1] }, of: seen }
      command: { value: high + 100*both }
actuators: { held: { of: command } }
scenarios: { any: { lasts: 1 s, inputs: { wanted: { step: 1 rad/s, at: 0 s } } } }
requirements: [{ name: R, measure: gain_margin, at: held, at_least: 2 }]
`;
    const text = `pawl: 1\nloop: A table from a file\n${controllers}`;
    const read = (path: string) => files[path];
    const loaded = loadSpec(text, 'table.pawl.yaml', vocabulary, { read });
    expect(loaded).toMatchObject({ kind: 'spec' });
    if (loaded.kind !== 'spec') return;
    const [high, both] = loaded.spec.controllers[0].signals.map(({ settings }) => settings);
    const numbers = (setting: unknown) =>
      (setting as { rows: { value: number; place: unknown }[][] }).rows.map((row) =>
        row.map(({ value }) => value),
      );
    expect(numbers(high.points)).toEqual([[0, 60, 120]]);
    expect(numbers(high.values)).toEqual([[2, 4, 8]]);
    expect(numbers(both.values)).toEqual([
      [1, 2],
      [3, 4],
      [5, 8],
    ]);
    expect(expandLoop(loaded.spec, new Map()).signals.has('both')).toBe(true);
    const wrong = loadSpec(
      text.replaceAll('speed, unit: rpm }', 'speed, unit: V }'),
      'table.pawl.yaml',
      vocabulary,
      {
        read,
      },
    );
    expect(wrong.kind === 'errors' && wrong.errors[0]).toMatchObject({
      place: { file: 'gains.csv', line: 3, column: 1 },
      message: expect.stringMatching(/an entry of `points`/),
    });
  });
});
