import { beforeAll, describe, expect, it } from 'vitest';
import { fusedMultiplyAdd } from '../../../src/loop/fused.js';
import { compiledC, fuses, outputOf, outputsOfLaw, uniform, withoutCompiler } from './against_c.js';

const samples = 10_000;

/** Triples of float32 numbers of many sizes; in every second one the rounding of x·y + z is hard. */
function triples(): Float32Array {
  const next = uniform(754);
  const any = (): number => (next() - 0.5) * 2 ** Math.floor(next() * 40 - 20);
  const rows = new Float32Array(3 * samples);
  for (let row = 0; row < samples; row++) {
    rows.set(row % 2 === 0 ? hard(next) : [any(), any(), any()], 3 * row);
  }
  return rows;
}

/** The product is half of the last bit of z, but for less than float64 can add to z. */
function hard(next: () => number): number[] {
  const tiny = 2 ** -Math.floor(14 + 10 * next());
  const [sign, other] = [Math.sign(next() - 0.5), Math.sign(next() - 0.5)];
  return [1 + tiny, (sign * (1 - tiny)) / 2, other * Math.floor(2 ** 23 * (1 + next()))];
}

/** By number as in sums.c. */
const expressions = [
  'x*y + z',
  'x*y + z',
  'z + x*y',
  'x*y - z',
  'z - x*y',
  'x*y + y*z',
  'x*y - y*z',
  'x*y + y*z + z*x',
  'x - y + z*x - z*y',
  '(x + y)*z - x',
  'x*y*z + x',
  '-(x*y) + z',
  'x + (y - x*z)*y',
];

function differences(actual: ArrayLike<number>, expected: Float32Array): number[] {
  return [...expected.keys()].filter((at) => !Object.is(actual[at], expected[at]));
}

describe.skipIf(withoutCompiler)('float32_fused equals C, to the bit, over 10,000 samples', () => {
  const rows = triples();
  let writtenOut: string;
  beforeAll(async () => {
    writtenOut = await compiledC(
      ['tests/loop/arithmetic/sums.c'],
      '-ffp-contract=off',
      '-DWRITTEN_OUT',
      '-Wall',
    );
  });

  const inC = async (program: string, which: number): Promise<Float32Array> =>
    new Float32Array(await outputOf(program, [`${which}`], rows));
  const inTheLoop = (which: number): Float64Array =>
    outputsOfLaw(
      {
        arithmetic: 'float32_fused',
        reads: ['x', 'y', 'z'],
        signals: `command: { value: ${expressions[which]} }`,
      },
      rows,
    );

  it('the multiply-add itself: as fmaf, also where two roundings would differ', async () => {
    const expected = await inC(writtenOut, 0);
    const row = (at: number): [number, number, number] => [rows[3 * at], rows[3 * at + 1], rows[3 * at + 2]];
    const own = Float64Array.from(expected, (_, at) => fusedMultiplyAdd(...row(at)));
    expect(differences(own, expected)).toEqual([]);
    const twice = Float64Array.from(expected, (_, at) => Math.fround(row(at)[0] * row(at)[1] + row(at)[2]));
    expect(differences(twice, expected).length).toBeGreaterThan(10);
  });

  for (const [which, expression] of expressions.entries()) {
    if (which === 0) continue;
    it(`${expression}: fused as the rule says`, async () => {
      expect(differences(inTheLoop(which), await inC(writtenOut, which))).toEqual([]);
    });
  }

  const withLaw = (): Float64Array =>
    outputsOfLaw(
      {
        arithmetic: 'float32_fused',
        reads: ['x'],
        coefficients: new Map([
          ['taps', [0.9, -1.2, 0.7, -1.3, 0.6]],
          ...Object.entries({ kp: [2.7], ki: [3.4], kd: [0.05], corner: [125.6] }),
        ]),
        signals: `shaped: { biquads: taps, of: x }
command: { pid: { kp: kp, ki: ki, kd: kd, derivative_corner: corner }, of: shaped }`,
      },
      rows.filter((_, at) => at % 3 === 0),
    );

  it('biquads and pid: each line of their definition is one expression', async () => {
    expect(differences(withLaw(), await inC(writtenOut, expressions.length))).toEqual([]);
  });

  it.skipIf(!fuses)('and the compiler contracts the same expressions by itself', async () => {
    const contracted = await compiledC(['tests/loop/arithmetic/sums.c'], ...fuses!);
    for (const [which, expression] of expressions.entries()) {
      if (which === 0) continue;
      expect(differences(inTheLoop(which), await inC(contracted, which)), expression).toEqual([]);
    }
    expect(differences(withLaw(), await inC(contracted, expressions.length))).toEqual([]);
  });
});

describe('fusedMultiplyAdd', () => {
  it('keeps what is special of float32 numbers', () => {
    expect(fusedMultiplyAdd(Number.POSITIVE_INFINITY, 1, 1)).toBe(Number.POSITIVE_INFINITY);
    expect(fusedMultiplyAdd(Number.POSITIVE_INFINITY, 1, Number.NEGATIVE_INFINITY)).toBeNaN();
    expect(fusedMultiplyAdd(Number.POSITIVE_INFINITY, 0, 1)).toBeNaN();
    expect(fusedMultiplyAdd(-0, 1, -0)).toBe(-0);
    expect(fusedMultiplyAdd(-1, 1, 1)).toBe(0);
    expect(fusedMultiplyAdd(2 ** 127, 2, 0)).toBe(Number.POSITIVE_INFINITY);
    expect(fusedMultiplyAdd(2 ** 127, 2, -(2 ** 127))).toBe(2 ** 127);
  });

  it('rounds denormal results once', () => {
    // In units of the least float32: 1.5 and 2.5 go to the even neighbour, what is a trifle off them does not.
    const least = 2 ** -149;
    expect(fusedMultiplyAdd(2 ** -75, 2 ** -75, least)).toBe(2 * least);
    expect(fusedMultiplyAdd((1 - 2 ** -24) * 2 ** -75, 2 ** -75, least)).toBe(least);
    expect(fusedMultiplyAdd(2 ** -75, 2 ** -75, 2 * least)).toBe(2 * least);
    expect(fusedMultiplyAdd((1 + 2 ** -23) * 2 ** -75, 2 ** -75, 2 * least)).toBe(3 * least);
  });
});
