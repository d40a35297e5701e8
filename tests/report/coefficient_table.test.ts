import fc from 'fast-check';
import { describe, expect, it } from 'vitest';
import { coefficientTable, storedNumber } from '../../src/report/coefficient_table.js';
import { harmful, hostileNames } from './hostile.js';
import { hostileRun } from './hostile_run.js';
import { kp, notch, requirement, specRun, units } from './sample_run.js';

const place = requirement().place;

describe('coefficientTable', () => {
  it('shows name, path, value, type, stored bits, address and place', () => {
    const [headings, scalar, first, second] = coefficientTable(specRun().coefficients)
      .trimEnd()
      .split('\n')
      .map((line) => line.split(/ {2,}/));
    expect(headings).toEqual([
      'name',
      'where in the build',
      'value',
      'type',
      'stored bits',
      'address',
      'declared at',
    ]);
    expect(scalar).toEqual([
      'kp',
      'azimuth.gains.kp',
      '0.3',
      'float',
      '0x3e99999a',
      '0x20000010',
      'firmware/azimuth.c:41',
    ]);
    expect(first).toEqual([
      'notch[0]',
      'azimuth_notch[0]',
      '1.25',
      'int16_t[2] as Q2.14',
      '0x5000',
      '0x08001000',
      'firmware/azimuth.c:47',
    ]);
    expect(second).toEqual(['notch[1]', 'azimuth_notch[1]', '-0.5', '0xe000', '0x08001002']);
  });

  it('counts the elements of a long array instead of filling the screen, last index fastest', () => {
    const elements = Array.from({ length: 40 }, () => notch.elements[0]);
    const text = coefficientTable([
      { name: 'table', place, unit: undefined, coefficient: { ...notch, elements, shape: [20, 2] } },
    ]);
    expect(text).toContain('table[1][1]');
    expect(text).toContain('table[15][1]');
    expect(text).toContain('and 8 more numbers');
    expect(text).not.toContain('table[16][0]');
  });

  it('says unit, enumerator and what is odd about the bits', () => {
    const elements = [
      { ...kp.elements[0], value: Number.NaN, remark: 'erased' as const, address: undefined },
    ];
    const odd = { name: 'kp', place, unit: units.second, coefficient: { ...kp, elements } };
    expect(coefficientTable([odd])).toContain('not a number s (erased)');
    const named = { ...kp, elements: [{ ...kp.elements[0], enumerator: 'FAST' }] };
    expect(coefficientTable([{ ...odd, coefficient: named }])).toContain('0.3 s (FAST)');
    expect(coefficientTable([])).toBe('no coefficients\n');
  });

  it.each(Object.entries(hostileNames))('is not harmed by a hostile name: %s', (_, name) => {
    const text = coefficientTable(hostileRun(name).specs[0].coefficients);
    expect(text).not.toMatch(harmful);
    expect(text.split('\n')).toHaveLength(3);
  });
});

describe('storedNumber', () => {
  const float32 = { kind: 'float', bits: 32 } as const;

  it('is a decimal number that a float32 stores as the same bits', () => {
    fc.assert(
      fc.property(fc.float({ noNaN: true, noDefaultInfinity: true }), (value) => {
        expect(Math.fround(Number(storedNumber(value, float32)))).toBe(value + 0);
      }),
      { seed: 9, numRuns: 500 },
    );
  });

  it('gives integers and fixed-point numbers in full', () => {
    expect(storedNumber(16384.000061035156, notch.format)).toBe('16384.000061035156');
    expect(storedNumber(4294967295, { kind: 'integer', bits: 32, signed: false })).toBe('4294967295');
  });
});
