import fc from 'fast-check';
import { describe, expect, it } from 'vitest';
import {
  counted,
  formatHeadroom,
  formatLimit,
  formatNumber,
  formatResult,
  formatResultShort,
  formatValue,
} from '../../src/report/format_value.js';
import { units } from './sample_run.js';

const percent = { unit: units.percent, inDecibels: false };
const decibel = { unit: units.decibel, inDecibels: true };
const second = { unit: units.second, inDecibels: false };

describe('formatValue', () => {
  it('writes an SI value in the unit of the requirement', () => {
    expect(formatValue(0.31415, percent)).toBe('31.41 %');
    expect(formatValue(Math.PI / 4, { unit: units.degree, inDecibels: false })).toBe('45 deg');
    expect(formatValue(2.5, second)).toBe('2.5 s');
    expect(formatValue(2.5, { unit: units.plain, inDecibels: false })).toBe('2.5');
  });

  it('writes an amplitude ratio in dB as 20·log10 of it', () => {
    // 20·log10(10) = 20 and 20·log10(2) = 6.0206: the definition of the decibel for amplitudes (IEC 60027-3).
    expect(formatValue(10, decibel)).toBe('20 dB');
    expect(formatValue(2, decibel)).toBe('6.021 dB');
    expect(formatValue(0, decibel)).toBe('minus infinite');
    expect(formatValue(-1, decibel)).toBe('-1 (a ratio)');
  });

  it('says "infinite" without a unit', () => {
    expect(formatValue(Number.POSITIVE_INFINITY, decibel)).toBe('infinite');
    expect(formatValue(Number.POSITIVE_INFINITY, second)).toBe('infinite');
  });

  it('never lets a value look like it stood on the other side of a limit', () => {
    expect(formatValue(0.2500001, percent, [0.25])).toBe('25.00001 %');
    expect(formatValue(0.25034, percent, [0.25032])).toBe('25.034 %');
    expect(formatValue(0.25, percent, [0.25])).toBe('25 %');
    const number = fc.double({ min: 1e-6, max: 1e6, noNaN: true });
    fc.assert(
      fc.property(number, number, (value, limit) => {
        // A limit has at most ten digits here: a person has written it.
        const written = Number(limit.toPrecision(10));
        const shown = Number.parseFloat(formatValue(value, second, [written]));
        expect(Math.sign(shown - Number.parseFloat(formatLimit(written, second)))).toBe(
          Math.sign(value - written),
        );
      }),
      { seed: 7, numRuns: 500 },
    );
  });

  it('keeps four significant digits of any number', () => {
    fc.assert(
      fc.property(fc.double({ min: 1e-9, max: 1e9, noNaN: true }), (value) => {
        const back = Number.parseFloat(formatValue(value, second));
        expect(Math.abs(back - value)).toBeLessThanOrEqual(5.000001e-4 * value);
      }),
      { seed: 8, numRuns: 500 },
    );
  });

  it('writes zero without a sign', () => {
    expect(formatNumber(-0)).toBe('0');
    expect(formatValue(-1e-320, second)).toBe('-1e-320 s');
  });
});

describe('formatResult', () => {
  it('says in full why there is no number, and briefly in a table', () => {
    const never = { kind: 'never', why: 'longer than 3.8 s: never stays in the band', left: 1 } as const;
    expect(formatResult(never, second)).toBe('longer than 3.8 s: never stays in the band');
    expect(formatResultShort(never, second)).toBe('never');
    const overflow = { kind: 'overflow', why: 'speed overflows at 0.52 s', time: 0.52 } as const;
    expect(formatResult(overflow, second)).toBe('speed overflows at 0.52 s');
    expect(formatResultShort(overflow, second)).toBe('overflow at 0.52 s');
    const unformed = { kind: 'unformed', why: 'the signal has no range' } as const;
    expect(formatResult(unformed, second)).toBe('could not be formed: the signal has no range');
    expect(formatResultShort(unformed, second)).toBe('no value');
  });

  it('writes a number in its unit, long and short', () => {
    expect(formatResult({ kind: 'value', value: 0.5 }, percent)).toBe('50 %');
    expect(formatResultShort({ kind: 'value', value: 0.5 }, percent)).toBe('50 %');
  });
});

describe('formatHeadroom', () => {
  it('is a share as per cent, and says when there is none', () => {
    expect(formatHeadroom(0.256)).toBe('25.6 %');
    expect(formatHeadroom(-0.0001)).toBe('-0.01 %');
    expect(formatHeadroom(undefined)).toBe('none');
    expect(formatHeadroom(Number.NEGATIVE_INFINITY)).toBe('minus infinite %');
  });
});

describe('counted', () => {
  it('fits the word to the number', () => {
    expect([counted(1, 'plant'), counted(1108, 'plant'), counted(0, 'plant')]).toEqual([
      '1 plant',
      '1,108 plants',
      '0 plants',
    ]);
  });
});
