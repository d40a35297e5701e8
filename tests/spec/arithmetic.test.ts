import fc from 'fast-check';
import { expect, test } from 'vitest';
import type { Arithmetic } from '../../src/spec/arithmetic.js';
import { parseFixedFormat } from '../../src/spec/fixed_formats.js';
import { errorsOf, specOf } from './loading.js';
import { smallSpec } from './small_spec.js';

function arithmeticOf(text: string): Arithmetic {
  return specOf(smallSpec({ settings: `every: 1 ms\narithmetic: ${text}` })).controllers[0].arithmetic;
}

test('floating point is one word', () => {
  for (const word of ['float64', 'float32', 'float32_fused']) expect(arithmeticOf(word)).toBe(word);
});

test('fixed point is a format with its rules, and may have an accumulator', () => {
  expect(arithmeticOf('{ format: Q1.15, rounding: nearest, overflow: saturate }')).toEqual({
    format: 'Q1.15',
    bits: 16,
    signed: true,
    fractionalBits: 15,
    rounding: 'nearest',
    overflow: 'saturate',
  });
  expect(
    arithmeticOf('{ format: UQ16.16, rounding: half_even, overflow: wrap, accumulator: 64 bit }'),
  ).toMatchObject({ bits: 32, signed: false, fractionalBits: 16, accumulator: 64 });
  expect(
    arithmeticOf('{ format: int32, rounding: truncate, overflow: wrap, accumulator: 40 bit }'),
  ).toMatchObject({ format: 'int32', bits: 32, signed: true, fractionalBits: 0, accumulator: 40 });
});

test('Qm.n counts the sign in m, and the short forms are the usual ones', () => {
  expect(parseFixedFormat('Q15')).toEqual(parseFixedFormat('Q1.15'));
  expect(parseFixedFormat('Q31')).toEqual(parseFixedFormat('Q1.31'));
  expect(parseFixedFormat('UQ16')).toEqual({ bits: 16, signed: false, fractionalBits: 16 });
  expect(parseFixedFormat('uint8')).toEqual({ bits: 8, signed: false, fractionalBits: 0 });
  expect(parseFixedFormat('float32')).toBeUndefined();
  fc.assert(
    fc.property(fc.constantFrom(8, 16, 32), fc.nat(31), (bits, fractionalBits) => {
      fc.pre(fractionalBits < bits);
      const signed = parseFixedFormat(`Q${bits - fractionalBits}.${fractionalBits}`);
      expect(signed).toEqual({ bits, signed: true, fractionalBits });
    }),
    { seed: 15 },
  );
});

const at = '20:17: ';
const wrong: [text: string, error: string][] = [
  [
    'Q1.15',
    `${at}fixed point also says how it rounds and overflows: { format: Q1.15, rounding: nearest, overflow: saturate }`,
  ],
  ['float32_fusd', `${at}unknown arithmetic \`float32_fusd\`; did you mean \`float32_fused\`?`],
  [
    '{ format: Q1.15, overflow: wrap }',
    '20:5: `rounding` is missing; expected truncate, toward_zero, nearest, half_even',
  ],
  ['{ format: Q1.15, rounding: nearest }', '20:5: `overflow` is missing; expected saturate or wrap'],
  [
    '{ format: Q1.15, rounding: nearst, overflow: wrap }',
    '20:44: `nearst` is not known here; did you mean `nearest`?',
  ],
  [
    '{ format: Q1.15, rounding: nearest, overflow: clip }',
    '20:63: `clip` is not known here; valid here: saturate, wrap',
  ],
  [
    '{ format: float32, rounding: nearest, overflow: wrap }',
    '20:27: float32 has no rounding and overflow to choose; write `arithmetic: float32`',
  ],
  [
    '{ format: fixed, rounding: nearest, overflow: wrap }',
    '20:27: `fixed` is no fixed-point format; expected one such as Q1.15, UQ8.8 or int32',
  ],
  [
    '{ format: Q2.15, rounding: nearest, overflow: wrap }',
    '20:27: the format `Q2.15` is 17 bits wide (m + n, where m counts the sign); a signal has 8, 16 or 32',
  ],
  [
    '{ format: int64, rounding: nearest, overflow: wrap }',
    '20:27: the format `int64` is 64 bits wide; a signal has 8, 16 or 32; wider sums are kept in the `accumulator`',
  ],
  [
    '{ format: Q0.16, rounding: nearest, overflow: wrap }',
    '20:27: the format `Q0.16` has no bit for its sign: m counts it',
  ],
  [
    '{ format: Q1.31, rounding: nearest, overflow: wrap, accumulator: 16 bit }',
    '20:82: `16 bit` is no accumulator for Q1.31; expected a width from 32 bit to 64 bit, such as 64 bit',
  ],
  [
    '{ format: Q1.15, rounding: nearest, overflow: wrap, accumulator: Q17.47 }',
    '20:82: `Q17.47` is no accumulator for Q1.15; expected a width from 16 bit to 64 bit, such as 64 bit',
  ],
];

for (const [text, error] of wrong) {
  test(`an error at its place: ${text}`, () => {
    expect(errorsOf(smallSpec({ settings: `every: 1 ms\narithmetic: ${text}` }))).toEqual([
      `a.pawl.yaml:${error}`,
    ]);
  });
}

test('a conversion of units that the firmware does not do is an error in every format but float64', () => {
  const pieces = (arithmetic: string) =>
    smallSpec({
      settings: `every: 1 ms\narithmetic: ${arithmetic}`,
      inputs: 'goal: { unit: mV }',
      signals: 'command: { value: k*(goal - seen), unit: mV }',
      actuators: 'drive: { of: command, unit: mV }',
      plant: 'out: { lag: 10 ms, of: drive, unit: V }',
      requirements: '- { name: R, measure: overshoot, of: out, to: goal, in: step, at_most: 10 % }',
    });
  expect(errorsOf(pieces('float64'))).toEqual([]);
  for (const arithmetic of ['float32_fused', '{ format: Q16.16, rounding: nearest, overflow: wrap }']) {
    expect(errorsOf(pieces(arithmetic))).toHaveLength(1);
  }
});
