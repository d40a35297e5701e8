import { beforeAll, describe, expect, it } from 'vitest';
import { compiledC, type Law, outputOf, outputsOfLaw, uniform, withoutCompiler } from './against_c.js';

/** So many random samples go through every law. */
const samples = 10_000;

interface CheckedLaw extends Law {
  /** Value of the last bit of readings and output. */
  step: number;
  /** The raw number of a reading from two numbers from 0 to 1: a slow and a quick one. */
  raw: (slow: number, quick: number, column: number) => number;
  /** Which part of the samples must reach the law's limits, so that the comparison covers them. */
  atEnds?: { ends: [number, number]; between: [number, number] };
}

const stored = (values: number[], format: string, fractionalBits: number) => ({
  values: values.map((value) => value * 2 ** -fractionalBits),
  format,
  fractionalBits,
});
const full = (bits: number) => (_: number, quick: number) => Math.floor((quick - 0.5) * 2 ** bits);

const laws: Record<string, CheckedLaw> = {
  q15_pi: {
    arithmetic: '{ format: Q1.15, rounding: nearest, overflow: saturate }',
    reads: ['target', 'measured'],
    coefficients: new Map([
      ['kp', stored([29491], 'Q1.15', 15)],
      ['ki', stored([1311], 'Q1.15', 15)],
    ]),
    signals: `error: { value: target - measured }
command: { pid: { kp: kp, ki: ki, gains: per_sample, anti_windup: hold_integral }, of: error, range: [-26214/32768, 26214/32768] }`,
    step: 2 ** -15,
    raw: (slow, quick, column) => Math.floor((column === 0 ? slow - 0.5 : quick - 0.5) * 50_000),
    atEnds: { ends: [-26214, 26214], between: [0.05, 0.95] },
  },
  q16_pi: {
    arithmetic: '{ format: Q16.16, rounding: half_even, overflow: saturate, accumulator: 64 bit }',
    reads: ['target', 'measured'],
    coefficients: new Map([
      ['kp', stored([163840], 'Q16.16', 16)],
      ['ki', stored([3277], 'Q16.16', 16)],
    ]),
    signals: `error: { value: target - measured }
command: { pid: { kp: kp, ki: ki, gains: per_sample, anti_windup: bound_integral }, of: error, range: [-50, 100] }`,
    step: 2 ** -16,
    raw: (slow, quick, column) => Math.floor((column === 0 ? slow - 0.4 : quick - 0.5) * 8e6),
    atEnds: { ends: [-50 * 65536, 100 * 65536], between: [0.02, 0.9] },
  },
  q15_section: {
    arithmetic: '{ format: Q15, rounding: truncate, overflow: wrap, accumulator: 32 bit }',
    reads: ['x'],
    coefficients: new Map([['taps', stored([14903, -28283, 14497, -28401, 13133], 'Q2.14', 14)]]),
    signals: 'command: { biquads: taps, of: x }',
    step: 2 ** -15,
    raw: full(16),
  },
  q31_section: {
    arithmetic: '{ format: Q31, rounding: nearest, overflow: saturate, accumulator: 64 bit }',
    reads: ['x'],
    coefficients: new Map([
      ['taps', stored([976690481, -1853554688, 950075393, -1861287937, 860684289], 'Q2.30', 30)],
    ]),
    signals: 'command: { biquads: taps, of: x }',
    step: 2 ** -31,
    raw: (_, quick) => Math.floor((quick - 0.5) * 2 ** 31),
  },
  q31_wrapped: {
    arithmetic: '{ format: Q31, rounding: truncate, overflow: wrap, accumulator: 64 bit }',
    reads: ['x'],
    coefficients: new Map([['k', stored([2147483647, 2000000011, -1999999973, -2147483648], 'Q4.28', 28)]]),
    signals: `command: { value: "k[0]*x + k[1]*before(x) - k[2]*before(command) - k[3]*x" }`,
    step: 2 ** -31,
    raw: full(32),
  },
  int32_mix: {
    arithmetic: '{ format: int32, rounding: truncate, overflow: wrap }',
    reads: ['a', 'b', 'c'],
    signals: 'command: { value: a*b + c - 7*a - (a + b)/c }',
    step: 1,
    // No divisor of zero, which C leaves undefined.
    raw: (slow, quick, column) => Math.floor((quick - 0.5) * (slow < 0.5 ? 2 ** 32 : 600)) || column + 1,
  },
  q8_toward_zero: {
    arithmetic: '{ format: Q8.8, rounding: toward_zero, overflow: saturate }',
    reads: ['a', 'b', 'c'],
    signals: 'command: { value: a*b + a/c - a*0.75 }',
    step: 2 ** -8,
    raw: (slow, quick, column) => Math.floor((quick - 0.5) * (slow < 0.5 ? 65536 : 3000)) || column + 1,
  },
};

function rowsOf({ reads, raw }: CheckedLaw): Int32Array {
  const next = uniform(20260704);
  const rows = new Int32Array(samples * reads.length);
  let slow = next();
  for (let i = 0; i < rows.length; i++) {
    if (i % 100 === 0) slow = next();
    rows[i] = raw(slow, next(), i % reads.length);
  }
  return rows;
}

describe.skipIf(withoutCompiler)(
  'a fixed-point controller equals its C code, to the bit, over 10,000 samples',
  () => {
    let program: string;
    beforeAll(async () => {
      program = await compiledC(['tests/loop/arithmetic/laws.c'], '-Wall', '-Werror');
    });

    for (const [name, law] of Object.entries(laws)) {
      it(`${name}: ${law.arithmetic}`, async () => {
        const rows = rowsOf(law);
        const expected = new Int32Array(await outputOf(program, [name], rows));
        const actual = outputsOfLaw(
          law,
          Float64Array.from(rows, (raw) => raw * law.step),
        );
        expect(expected).toHaveLength(samples);
        const wrong = expected.findIndex((raw, at) => actual[at] !== raw * law.step);
        expect(wrong, `sample ${wrong}: ${actual[wrong] / law.step} for ${expected[wrong]}`).toBe(-1);
        expect(new Set(expected).size).toBeGreaterThan(1000);
        if (law.atEnds) {
          const { ends, between } = law.atEnds;
          const share = expected.filter((raw) => ends.includes(raw)).length / samples;
          expect(share).toBeGreaterThan(between[0]);
          expect(share).toBeLessThan(between[1]);
        }
      });
    }
  },
);
