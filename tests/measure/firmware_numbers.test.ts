import fc from 'fast-check';
import { describe, expect, it } from 'vitest';
import { PlantEvaluator } from '../../src/measure/evaluate_plant.js';
import { judgeSpec } from '../../src/verdict/judge_spec.js';
import { measureSmall, numberOf, type SmallLoop, smallSpecOf } from '../small_loop.js';

const coefficients = `
kp: drive.kp
corner: { at: drive.corner, unit: Hz }
map: { at: drive.map, unit: mV }
taps: { at: drive.taps, format: Q2.14 }`.trim();

/** An integrator under a gain of the build; the other numbers are there to be measured only. */
function loop(requirements: string[], more: Partial<SmallLoop> = {}): SmallLoop {
  const lines = requirements.map((text, i) => `{ name: R${i}, ${text} }`);
  // A coefficient that no requirement names would be reported as unused.
  const used = ['corner, at_most: 1 kHz', 'map, at_most: 1 V', 'taps, at_most: 9'].map(
    (rest, i) => `{ name: U${i}, measure: largest_entry, of: ${rest} }`,
  );
  return {
    inputs: 'u: {}',
    parameters: 'weight: { nominal: 1, spread: 50 % }',
    plant: 'y: { integral: drive/weight }',
    sensors: 'seen: { of: y }',
    controllers:
      'law:\n  every: 100 ms\n  signals:\n    command: { value: kp*(1 1/s)*(u - seen), unit: 1/s }',
    actuators: 'drive: { of: command, unit: 1/s }',
    coefficients,
    requirements: [...lines, ...used],
    ...more,
  };
}

const numbers = { kp: [1.5], corner: [12], map: [-2, 0.5, 0.5, 7], taps: [0.25, -2, 1] };

function results(requirements: string[], more: Record<string, number[]> = {}) {
  const all = measureSmall(loop(requirements), { coefficients: { ...numbers, ...more } });
  return all.slice(0, requirements.length);
}

describe('numbers of the build', () => {
  it('are in the unit of the coefficient, plain without one', () => {
    const [kp, corner] = results([
      'measure: coefficient_value, of: kp, at_most: 2',
      'measure: coefficient_value, of: corner, between: [10 Hz, 0.02 kHz]',
    ]).map(numberOf);
    expect([kp, corner]).toEqual([1.5, 12]);
  });

  it('have a largest and a smallest entry', () => {
    const [most, least] = results([
      'measure: largest_entry, of: map, at_most: 10 mV',
      'measure: smallest_entry, of: map, at_least: -10 mV',
    ]).map(numberOf);
    expect([most, least]).toEqual([0.007, -0.002]);
  });

  it('that are an array have no single value, and one number has no neighbour', () => {
    const [array, single] = results([
      'measure: coefficient_value, of: map, at_most: 1 V',
      'measure: least_rise, of: kp, at_least: 0, scale: 1',
    ]);
    expect(array).toMatchObject({ kind: 'unformed', why: expect.stringContaining('an array of 4') });
    expect(single).toMatchObject({ kind: 'unformed', why: expect.stringContaining("'kp' is one number") });
  });

  it('that are not numbers are no result', () => {
    const [value, rise] = results(
      [
        'measure: coefficient_value, of: corner, at_most: 1 kHz',
        'measure: least_rise, of: map, at_least: 0 V, scale: 1 mV',
      ],
      { corner: [Number.NaN], map: [1, Number.NaN, 3] },
    );
    expect([value.kind, rise.kind]).toEqual(['unformed', 'unformed']);
  });

  it('must have been read', () => {
    const spec = smallSpecOf(loop(['measure: coefficient_value, of: kp, at_most: 2']));
    expect(() => new PlantEvaluator(spec, new Map([['kp', [1]]]))).toThrow(
      "coefficient 'corner' was not read from the build",
    );
  });
});

describe('a table', () => {
  it('rises or falls by its least step, and the note says where', () => {
    const steps = results([
      'measure: least_rise, of: map, at_least: 0 V, scale: 1 mV',
      'measure: least_fall, of: map, at_least: 0 V, scale: 1 mV',
    ]);
    expect(steps).toEqual([
      { kind: 'value', value: 0, note: "between 'map[1]' and 'map[2]'" },
      { kind: 'value', value: -0.0065, note: "between 'map[2]' and 'map[3]'" },
    ]);
  });

  it('rises throughout exactly where sorting changes nothing, and falls exactly where its reverse rises', () => {
    const tables = fc.array(fc.integer({ min: -50, max: 50 }), { minLength: 2, maxLength: 12 });
    const both = [
      'measure: least_rise, of: kp, at_least: 0, scale: 1',
      'measure: least_fall, of: kp, at_least: 0, scale: 1',
    ];
    const evaluate = (kp: number[]): number[] => {
      const spec = smallSpecOf(
        loop(both, {
          controllers:
            'law:\n  every: 100 ms\n  signals:\n    command: { value: "kp[0]*(1 1/s)*(u - seen)", unit: 1/s }',
        }),
      );
      const evaluator = new PlantEvaluator(spec, new Map(Object.entries({ ...numbers, kp })));
      return evaluator.evaluate(Float64Array.of(1), 0).slice(0, 2).map(numberOf);
    };
    fc.assert(
      fc.property(tables, (table) => {
        const [rise, fall] = evaluate(table);
        const sorted = [...table].sort((a, b) => a - b);
        expect(rise >= 0).toBe(table.every((value, i) => value === sorted[i]));
        expect(rise > 0).toBe(rise >= 0 && new Set(table).size === table.length);
        expect(evaluate([...table].reverse())).toEqual([fall, rise]);
      }),
      { seed: 5, numRuns: 60 },
    );
  });
});

describe('the use of a number format', () => {
  const use = (values: number[], format: string, fractionalBits: number | undefined) => {
    const spec = smallSpecOf(loop(['measure: stored_range_use, of: taps, at_most: 90 %']));
    const read = new Map<string, number[] | { values: number[]; format: string; fractionalBits?: number }>(
      Object.entries(numbers),
    );
    read.set('taps', { values, format, fractionalBits });
    return new PlantEvaluator(spec, read as never).evaluate(Float64Array.of(1), 0)[0];
  };

  it('is counted to the end on the side of the number', () => {
    // Q2.14 goes from −2 to 2 − 2^−14; int8 from −128 to 127; UQ8.8 to 256 − 2^−8.
    expect(numberOf(use([0.25, -1, 0.5], 'Q2.14', 14))).toBe(0.5);
    expect(numberOf(use([2 - 2 ** -14, 0], 'Q2.14', 14))).toBe(1);
    expect(numberOf(use([-2], 'Q2.14', 14))).toBe(1);
    expect(numberOf(use([-64, 127], 'int8', 0))).toBe(1);
    expect(numberOf(use([51], 'uint8', 0))).toBe(0.2);
    expect(numberOf(use([256 - 2 ** -8], 'UQ8.8', 8))).toBe(1);
    expect(numberOf(use([0, 0], 'Q1.15', 15))).toBe(0);
  });

  it('has no meaning for floating point, nor for numbers that are scaled', () => {
    expect(use([0.5], 'float32', undefined)).toMatchObject({
      kind: 'unformed',
      why: expect.stringContaining('are float32'),
    });
    const [scaled] = results(['measure: stored_range_use, of: taps, at_most: 90 %']);
    expect(scaled).toMatchObject({ kind: 'unformed', why: expect.stringContaining('without scale') });
  });
});

describe('a requirement on the build', () => {
  it('is judged once, at the nominal plant, whatever the parameters', async () => {
    const spec = smallSpecOf(
      loop([
        'measure: coefficient_value, of: kp, at_most: 2',
        'measure: coefficient_value, of: kp, at_least: 2',
      ]),
    );
    const { requirements } = await judgeSpec(
      { ...spec, perturbation: { ...spec.perturbation, plants: 20 } },
      new Map(Object.entries(numbers)),
      { workers: 1 },
    );
    const [met, broken] = requirements;
    expect([met.verdict.kind, broken.verdict.kind]).toEqual(['met', 'broken']);
    expect(met).toMatchObject({ evidence: { kind: 'nominal_only' }, shrunk: undefined, reach: undefined });
    expect(met.worst).toEqual(met.nominal);
    expect(met.worst).toMatchObject({ origin: 'nominal', headroom: 0.25 });
    expect(broken.worst).toMatchObject({ origin: 'nominal', headroom: -0.25 });
  });

  it('counts a limit that is met exactly as met, also through its unit', async () => {
    const spec = smallSpecOf(loop(['measure: coefficient_value, of: map, at_most: 3.3 mV']));
    const { requirements } = await judgeSpec(spec, new Map(Object.entries({ ...numbers, map: [3.3] })), {
      workers: 1,
    });
    expect(requirements[0]).toMatchObject({ verdict: { kind: 'met' }, worst: { headroom: 0 } });
  });
});

describe('mistakes in a requirement on the build', () => {
  const fault = (text: string) => () => smallSpecOf(loop([text]));

  it('are told at their place', () => {
    expect(fault('measure: coefficient_value, of: kq, at_most: 2')).toThrow(
      /`of` must be the name of a coefficient, but is `kq`; did you mean `kp`/,
    );
    expect(fault('measure: coefficient_value, of: seen, at_most: 2')).toThrow(
      /must be the name of a coefficient, but is `seen`/,
    );
    expect(fault('measure: coefficient_value, of: corner, at_most: 2 s')).toThrow(/Hz/);
    expect(fault('measure: coefficient_value, of: kp, at_most: 2 s')).toThrow(/plain number/);
    expect(fault('measure: coefficient_value, of: kp, in: run, at_most: 2')).toThrow(
      /`coefficient_value` is a measure of the build and needs no scenario/,
    );
    expect(fault('measure: coefficient_value, of: kp, holds_for: all, at_most: 2')).toThrow(
      /the same for every plant, and has no `holds_for:`/,
    );
    expect(fault('measure: coefficient_value, of: kp, around: { y: 1 }, at_most: 2')).toThrow(
      /is a measure of the build and has no `around:`/,
    );
    expect(fault('measure: coefficient_value, at_most: 2')).toThrow(/needs `of:` \(a coefficient\)/);
  });
});
