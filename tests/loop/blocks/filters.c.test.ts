import { beforeAll, describe, expect, it } from 'vitest';
import { compiledC, outputOf, outputsOfLaw, withoutCompiler } from '../arithmetic/against_c.js';
import { noise, outputs } from './law.js';

const taps = '[0.21, -0.31, 0.17, -1.5, 0.7]';
const fed = 'out: { state_feedback: { states: [s1, s2], gains: [0.8, 0.6] } }';
const observed = (settings: string): string[] => [
  fed,
  's1: { estimate: model }',
  's2: { estimate: model }',
  `model: { observer: { states: [s1, s2], measured: x, driven_by: out, state_matrix: [[1, 0.1], [-0.2, 0.9]], input_matrix: [0.02, 0.3], output_matrix: [1, 0.4], gain: [0.35, 0.15], ${settings} } }`,
];

/** Laws of one reading `x`, by the name that the C code has for them. */
const realLaws: Record<string, string[]> = {
  direct_2: [`out: { biquads: { sections: ${taps}, structure: direct_2 }, of: x }`],
  transposed_2: [`out: { biquads: { sections: ${taps}, structure: transposed_2 }, of: x }`],
  negated: ['out: { biquads: { sections: [0.21, -0.31, 0.17, 1.5, -0.7], feedback_sign: plus }, of: x }'],
  third_order: [
    'out: { transfer_function: { numerator: [0.3, -0.7], denominator: [1.6, -2.1, 1.1, -0.2] }, of: x }',
  ],
  weight: ['out: { low_pass: { weight: 0.3 }, of: x }'],
  trapezoid: ['out: { low_pass: { time_constant: 7 ms, sum_by: trapezoid }, of: x }'],
  lead_lag: ['out: { lead_lag: { lead: 3 ms, lag: 11 ms }, of: x, gain: 1.7 }'],
  feed_forward: ['out: { feed_forward: 3 ms, of: x, gain: 1.7 }'],
  mean_of_5: ['out: { moving_average: 5, of: x }'],
  mean_of_4: ['out: { moving_average: 4, of: x }'],
  observed_now: observed('uses: this_sample'),
  observed_late: observed('uses: last_sample, starts_at: [0.5, -0.25]'),
  table: ['out: { table: { points: [-0.8, -0.3, 0.1, 0.9], values: [2, 0.3, 1.1, -1] }, of: x }'],
  switched: ['out: { switch: { between: [2*x, 0.5 - x], by: x > 0.4, bumpless: 20 ms } }'],
  slew: ['out: { value: x, slew: 60 1/s }'],
};

const section = {
  values: [3441, -5079, 2785, -24576, 11469].map((raw) => raw / 2 ** 14),
  format: 'Q2.14',
  fractionalBits: 14,
};
const fixedLaws: Record<string, string> = {
  q15_transposed: 'command: { biquads: { sections: taps, structure: transposed_2 }, of: x }',
  q15_mean: 'command: { moving_average: 4, of: x }',
  q15_weight: 'command: { low_pass: { weight: 0.25 }, of: x }',
  q15_table:
    'command: { table: { points: [-0.5, 0, 0.25, 0.75], values: [0.25, 0.5, -0.25, 0.125] }, of: x }',
};

const count = 10_000;
/** A wandering level with noise on it. */
const samples = noise(2 * count).flatMap((x, k, all) => (k % 2 ? [] : [0.7 * all[k - (k % 300)] + 0.3 * x]));

describe.skipIf(withoutCompiler)(`equal to the bit with C over ${count} samples`, () => {
  let program: string;
  beforeAll(async () => {
    program = await compiledC(
      ['tests/loop/blocks/filters_law.c'],
      '-Wall',
      '-Wextra',
      '-Werror',
      '-ffp-contract=off',
    );
  });

  const expectEqual = (name: string, actual: Float64Array, expected: ArrayLike<number>): void => {
    expect(expected).toHaveLength(count);
    const wrong = actual.findIndex((value, k) => value !== expected[k]);
    expect(wrong, `${name}: sample ${wrong}: ${actual[wrong]} for ${expected[wrong]}`).toBe(-1);
    expect(new Set(actual).size).toBeGreaterThan(1000);
  };

  for (const [name, signals] of Object.entries(realLaws)) {
    it(`in single precision: ${name}`, async () => {
      const given = Float32Array.from(samples);
      const expected = new Float32Array(await outputOf(program, [name], given));
      const actual = outputs({ signals, arithmetic: 'float32', period: 0.001 }, [...given]);
      expectEqual(name, Float64Array.from(actual), expected);
    });
  }

  for (const [name, signals] of Object.entries(fixedLaws)) {
    it(`in fixed point: ${name}`, async () => {
      const raw = Int32Array.from(samples, (x) => Math.floor(32768 * x));
      const expected = Array.from(new Int32Array(await outputOf(program, [name], raw)), (y) => y / 32768);
      const law = {
        arithmetic: '{ format: Q15, rounding: truncate, overflow: saturate, accumulator: 64 bit }',
        signals,
        reads: ['x'],
        coefficients: new Map(signals.includes('taps') ? [['taps', section]] : []),
      };
      expectEqual(
        name,
        outputsOfLaw(
          law,
          Float64Array.from(raw, (one) => one / 32768),
        ),
        expected,
      );
    });
  }
});
