import fc from 'fast-check';
import { describe, expect, it } from 'vitest';
import { edgeOf } from '../../../src/linear/edge.js';
import { Linearisation } from '../../../src/linear/linearise.js';
import { Evaluation } from '../../../src/loop/evaluate.js';
import { LoopError } from '../../../src/loop/loop.js';
import type { StoredNumbers } from '../../../src/loop/parts.js';
import { type Law, loopOf, outputsOfLaw, uniform } from './against_c.js';

const q15 = '{ format: Q1.15, rounding: nearest, overflow: saturate }';
const stored = (format: string, fractionalBits: number | undefined, ...values: number[]): StoredNumbers => ({
  values,
  format,
  fractionalBits,
});

function law(signals: string, more: Partial<Law> = {}): Law {
  return { arithmetic: q15, reads: ['x'], signals, ...more };
}

/** Lines of a law's spec before its signals. */
const linesBefore = 11;

/** The message of the mistake that a law has, with its line in the law's signals, counted from 1. */
function mistake(given: Law): string {
  try {
    loopOf(given);
  } catch (error) {
    if (!(error instanceof LoopError)) throw error;
    return `${error.place.line - linesBefore}:${error.place.column} ${error.message}`;
  }
  return 'none';
}

describe('numbers in fixed point', () => {
  const withK = (k: StoredNumbers): Partial<Law> => ({ coefficients: new Map([['k', k]]) });

  it('may have a format of their own as factors: the exact product is shifted once', () => {
    const given = law('command: { value: k*x }', withK(stored('Q2.14', 14, 1.5)));
    expect([...outputsOfLaw(given, [0.25, 3 * 2 ** -15])]).toEqual([0.375, 5 * 2 ** -15]);
  });

  it('are converted in a sum where that is exact, and else are an error that names both formats', () => {
    const exact = law('command: { value: x + k }', withK(stored('Q2.14', 14, 0.5)));
    expect([...outputsOfLaw(exact, [0.25])]).toEqual([0.75]);
    expect(mistake(law('command: { value: x + k }', withK(stored('Q2.14', 14, 1.5))))).toBe(
      "1:29 coefficient 'k' is 1.5 (Q2.14), which is outside Q1.15: its numbers go from -1 to 0.999969482421875",
    );
    expect(mistake(law('command: { value: x + k }', withK(stored('Q1.31', 31, 2 ** -20))))).toBe(
      "1:29 coefficient 'k' is 9.5367431640625e-7 (Q1.31), which is no number of Q1.15: its nearest are 0 and 0.000030517578125",
    );
  });

  it('that the build holds as floats must be numbers of the format, also as factors', () => {
    const half = law('command: { value: k*x }', withK(stored('float32', undefined, 0.5)));
    expect([...outputsOfLaw(half, [0.5])]).toEqual([0.25]);
    const tenth = Math.fround(0.1);
    expect(mistake(law('command: { value: k*x }', withK(stored('float32', undefined, tenth))))).toContain(
      `1:25 coefficient 'k' is ${tenth} (float32), which is no number of Q1.15: its nearest are`,
    );
  });

  it('name the element of an array that does not fit', () => {
    const given = law(
      'command: { biquads: k, of: x }',
      withK(stored('float32', undefined, 0.5, 0, 0, 0.3, 0)),
    );
    expect(mistake(given)).toContain("coefficient 'k[3]' is 0.3 (float32), which is no number of Q1.15");
  });

  it('in expressions are exact, or an error', () => {
    expect([...outputsOfLaw(law('command: { value: 0.25*x + 3/8 + sqrt(4)/8 - 2^-2 }'), [0.5])]).toEqual([
      0.5,
    ]);
    expect([...outputsOfLaw(law('command: { value: 2*x }'), [0.25])]).toEqual([0.5]);
    expect(mistake(law('command: { value: 0.1*x }'))).toContain(
      '0.1 is no number of Q1.15: its nearest are 0.099',
    );
    expect(mistake(law('command: { value: x + 2 }'))).toContain('2 is outside Q1.15');
    expect(mistake(law('sum: { value: x }\ncommand: { value: sum, range: [-1, 1] }'))).toBe(
      '2:7 1 is outside Q1.15: its numbers go from -1 to 0.999969482421875',
    );
  });

  it('are not the results of functions whose making in firmware is not known', () => {
    expect(mistake(law('command: { value: sqrt(x) }'))).toBe(
      "1:25 'sqrt' is not defined in Q1.15: write what the firmware does, with products and tables",
    );
  });
});

describe('what enters a fixed-point controller', () => {
  it('is rounded to the nearest number of the format, and held at its ends', () => {
    const loop = loopOf(law('command: { value: x }'));
    const read = (position: number): number =>
      new Evaluation({ state: [position] }).of(loop.readings[0].sampled);
    expect(read(0.3)).toBe(Math.round(0.3 * 32768) / 32768);
    expect(read(1.7)).toBe(32767 / 32768);
    expect(read(-1.7)).toBe(-1);
  });
});

describe('operations that give other things than sums', () => {
  const outputs = (value: string): number[] => [
    ...outputsOfLaw(law(`command: { value: "${value}" }`), [-1, -0.5, 0, 0.25]),
  ];

  it('overflow where C’s would', () => {
    const most = 32767 / 32768;
    expect(outputs('-x')).toEqual([most, 0.5, 0, -0.25]);
    expect(outputs('abs(x)')).toEqual([most, 0.5, 0, 0.25]);
    expect(outputs('ceil(x)')).toEqual([-1, 0, 0, most]);
    expect(outputs('sign(x)')).toEqual([-1, -1, 0, most]);
    expect(outputs('x < 0')).toEqual([most, most, 0, 0]);
    expect(outputs('if(x < 0, sign(x), 0.5)')).toEqual([-1, -1, 0.5, 0.5]);
    expect(outputs('0.5*sign(x)')).toEqual([-0.5, -0.5, 0, 0.5]);
  });

  it('choose among numbers of the format', () => {
    expect(outputs('if(x < -0.25, 0.5, x)')).toEqual([0.5, 0.5, 0, 0.25]);
    expect(outputs('max(x, -0.25)')).toEqual([-0.25, -0.25, 0, 0.25]);
  });
});

describe('a fine format', () => {
  const filter = {
    signals: 'command: { biquads: taps, of: x }',
    reads: ['x'],
    coefficients: new Map([['taps', [0.25, 0.5, 0.25, -0.5, 0.25]]]),
  };

  it('comes as near to the real law as its step is small', () => {
    const next = uniform(5);
    const samples = Float64Array.from({ length: 500 }, () => Math.round((next() - 0.5) * 128) / 128);
    const real = outputsOfLaw({ ...filter, arithmetic: 'float64' }, samples);
    for (const fraction of [8, 16, 24, 28]) {
      const arithmetic = `{ format: Q${32 - fraction}.${fraction}, rounding: nearest, overflow: saturate, accumulator: 64 bit }`;
      const fixed = outputsOfLaw({ ...filter, arithmetic }, samples);
      const error = Math.max(...fixed.map((y, at) => Math.abs(y - real[at])));
      // Half a step enters at each instant; the filter's poles have the modulus 0.5, so it dies out by the fourth.
      expect(error).toBeLessThan(1.5 * 2 ** -fraction);
      expect(error).toBeGreaterThan(0);
    }
  });

  it('takes an accumulator or not with the same result where nothing is cut', () => {
    fc.assert(
      fc.property(fc.array(fc.integer({ min: -99, max: 99 }), { minLength: 2, maxLength: 20 }), (given) => {
        const integers = (more: string): Law => ({
          arithmetic: `{ format: int32, rounding: truncate, overflow: wrap${more} }`,
          reads: ['x'],
          signals: 'command: { value: 3*x - 2*before(x) + x*x }',
        });
        const outputs = outputsOfLaw(integers(', accumulator: 64 bit'), given);
        expect(outputs).toEqual(outputsOfLaw(integers(''), given));
      }),
      { numRuns: 20, seed: 3 },
    );
  });
});

describe('the linear analysis', () => {
  const signals =
    'error: { value: 0.25*x - 0.5*x*x }\ncommand: { pid: { kp: 0.5, ki: 0.125, gains: per_sample }, of: error }';
  const inFormat = (arithmetic: string) => loopOf(law(signals, { arithmetic }));
  const formats = [
    'float32',
    'float32_fused',
    q15,
    '{ format: Q1.15, rounding: truncate, overflow: wrap, accumulator: 32 bit }',
    '{ format: Q2.30, rounding: half_even, overflow: saturate, accumulator: 64 bit }',
    '{ format: Q8.24, rounding: toward_zero, overflow: wrap }',
  ];

  it.each(formats)('takes rounding as gain one in %s', (arithmetic) => {
    const at = { reading: [0.3], memory: [0.1] };
    const slopes = (of: string) => {
      const linearisation = new Linearisation(inFormat(of));
      const evaluation = new Evaluation(at, 'off');
      return (['reading', 'memory'] as const).flatMap((leaves) =>
        (['held', 'memory'] as const).map((rows) => [...linearisation.slopes(rows, leaves, evaluation).data]),
      );
    };
    expect(slopes(arithmetic)).toEqual(slopes('float64'));
    const value = (of: string) => new Evaluation(at, 'off').of(inFormat(of).held[0].value);
    expect(value(arithmetic)).toBeCloseTo(value('float64'), 14);
  });

  it.each(formats.slice(2))('has no slope at the end of %s', (arithmetic) => {
    const [held] = inFormat(arithmetic).held;
    const edge = (integral: number) => edgeOf(held.value, new Evaluation({ memory: [integral] }, 'off'));
    expect(edge(0.5)).toBeUndefined();
    expect(edge(200)).toContain('the end of a number format (200 in -');
  });
});
