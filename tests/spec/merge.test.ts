import fc from 'fast-check';
import { describe, expect, it } from 'vitest';
import { errorsOf, heliostatWith, specOf } from './loading.js';
import { smallSpec } from './small_spec.js';

// Protects what lets a broken requirement through: a waiver without a name, a reason or a last day is an error.

const merge = (waivers: string): string =>
  smallSpec({ rest: `merge:\n  reference: a\n  may_slip: 5 %\n  waivers:\n    - ${waivers}` });

describe('waivers', () => {
  it('are read with name, reason, last day and place', () => {
    const spec = specOf(merge('{ requirement: R, reason: the new motor comes in March, until: 2027-03-01 }'));
    expect(spec.merge).toEqual({
      reference: 'a',
      maySlip: 0.05,
      place: { file: 'a.pawl.yaml', line: 31, column: 1 },
      waivers: [
        {
          requirement: 'R',
          reason: 'the new motor comes in March',
          until: '2027-03-01',
          place: { file: 'a.pawl.yaml', line: 35, column: 22 },
        },
      ],
    });
  });

  it('need not be there', () => {
    expect(specOf(smallSpec({ rest: 'merge: { reference: a, may_slip: 5 % }' })).merge?.waivers).toEqual([]);
  });

  it.each([
    [
      '{ reason: because, until: 2027-03-01 }',
      '35:7: `requirement` is missing; expected the name of a requirement',
    ],
    ['{ requirement: R, until: 2027-03-01 }', '35:7: `reason` is missing; expected plain words'],
    ['{ requirement: R, reason: because }', '35:7: `until` is missing; expected a date such as 2027-03-01'],
    [
      '{ requirement: Q, reason: because, until: 2027-03-01 }',
      '35:22: unknown requirement `Q`; valid here: R',
    ],
    ['{ requirement: R, reason: " ", until: 2027-03-01 }', '35:33: a waiver needs a reason in plain words'],
    [
      '{ requirement: R, reason: because, until: 2027-02-29 }',
      '35:49: `2027-02-29` is no date; the last day of a waiver is written as 2027-03-01',
    ],
    [
      '{ requirement: R, reason: because, until: for ever }',
      '35:49: `for ever` is no date; the last day of a waiver is written as 2027-03-01',
    ],
    [
      '{ requirement: R, reason: a, until: 2027-03-01 }\n    - { requirement: R, reason: b, until: 2027-03-01 }',
      '36:22: the waiver of `R` is already at line 35; one is enough',
    ],
  ])('%s is refused', (waiver, line) => {
    expect(errorsOf(merge(waiver))).toEqual([`a.pawl.yaml:${line}`]);
  });

  it('take every day of the calendar, and nothing else of its form', () => {
    // The Gregorian calendar's days, counted without the calendar of the language: months and leap years.
    const lengths = (year: number): number[] => {
      const leap = (year % 4 === 0 && year % 100 !== 0) || year % 400 === 0;
      return [31, leap ? 29 : 28, 31, 30, 31, 30, 31, 31, 30, 31, 30, 31];
    };
    const [year, month, day] = [fc.integer({ min: 1583, max: 9999 }), fc.nat(13), fc.nat(32)];
    fc.assert(
      fc.property(year, month, day, (y, m, d) => {
        const pad = (n: number): string => String(n).padStart(2, '0');
        const isDay = m >= 1 && m <= 12 && d >= 1 && d <= lengths(y)[m - 1];
        const errors = errorsOf(merge(`{ requirement: R, reason: a, until: ${y}-${pad(m)}-${pad(d)} }`));
        expect(errors).toHaveLength(isDay ? 0 : 1);
      }),
      { numRuns: 50 },
    );
  });
});

describe('the functions of the control law', () => {
  it('are read with their places', () => {
    const text = heliostatWith(['  coefficients: ', '  law: [azimuth_step, azimuth_init]\n  coefficients: ']);
    expect(specOf(text).firmware?.law).toEqual([
      { name: 'azimuth_step', place: { file: 'a.pawl.yaml', line: 7, column: 9 } },
      { name: 'azimuth_init', place: { file: 'a.pawl.yaml', line: 7, column: 23 } },
    ]);
    expect(specOf(smallSpec()).firmware?.law).toBeUndefined();
  });

  it('are named once each', () => {
    const text = heliostatWith(['  coefficients: ', '  law: [azimuth_step, azimuth_step]\n  coefficients: ']);
    expect(errorsOf(text)).toEqual(['a.pawl.yaml:7:23: the function `azimuth_step` is already at line 7']);
  });
});
