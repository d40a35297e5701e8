import fc from 'fast-check';
import { describe, expect, it } from 'vitest';
import { largestGain } from '../../src/linear/largest_gain.js';
import { add, identity, multiply, transpose } from '../../src/linear/matrix.js';
import { noiseGain, stateCovariance } from '../../src/linear/noise_gain.js';
import { prepareResponse, prepareResponseMatrix, responseAt } from '../../src/linear/response.js';
import { largestSingularValue } from '../../src/linear/singular_value.js';
import type { StateEquations } from '../../src/linear/state_equations.js';
import { expectPublished, publishedCase } from '../published.js';
import { holdEquivalent } from './hold_equivalent.js';
import { loopOf, product, systemOf } from './loops.js';

function publishedSystem(id: string): StateEquations {
  const { state_matrix: a, input_matrix: b, output_matrix: c } = publishedCase(id).given;
  const d = c.map(() => b[0].map(() => 0));
  return systemOf(a, b, c, d);
}

// Each published case names its own source: reference/published/README.md.
describe('the largest gain over frequency', () => {
  for (const id of ['F01', 'F03']) {
    it(`${id}: ${publishedCase(id).title}`, () => {
      const { value, frequency } = largestGain(publishedSystem(id));
      expectPublished(id, 'norm', value);
      expectPublished(id, 'frequency', frequency!);
    });
  }

  it(`F02: ${publishedCase('F02').title}`, () => {
    const { numerators, denominators } = publishedCase('F02').given;
    const peaks = numerators.map((numerator: number[], k: number) =>
      largestGain(loopOf(numerator, denominators[k])),
    );
    expectPublished(
      'F02',
      'norms',
      peaks.map(({ value }: { value: number }) => value),
    );
    expect(peaks[0].frequency).toBe(0);
    expect(peaks[1].frequency).toBe(Number.POSITIVE_INFINITY);
  });

  for (const id of ['F04', 'F05']) {
    it(`${id}: ${publishedCase(id).title}`, () => {
      const { numerators, denominators } = publishedCase(id).given;
      const period = 0.01;
      const peaks = numerators.map((numerator: number[], k: number) =>
        largestGain(loopOf(numerator, denominators[k], period)),
      );
      expectPublished(
        id,
        'norms',
        peaks.map(({ value }: { value: number }) => value),
      );
      expectPublished(
        id,
        'angles',
        peaks.map(({ frequency }: { frequency: number }) => frequency * period),
      );
    });
  }

  it('does not miss a narrow peak beside a broad one that is nearly as high', () => {
    // Closed form: each second-order part peaks at 1/(2ζ√(1 − ζ²)) alone; here they are far apart in frequency.
    const narrow = 1e-6;
    const broad = loopOf([1.0001 * 0.6], product([1, 0.6, 1]));
    const sharp = loopOf([2 * narrow * 1e8 * 1.7], [1, 2 * narrow * 1e4, 1e8]);
    const both: StateEquations = {
      ...broad,
      ...systemOf(
        [
          [broad.a.data[0], broad.a.data[1], 0, 0],
          [broad.a.data[2], broad.a.data[3], 0, 0],
          [0, 0, sharp.a.data[0], sharp.a.data[1]],
          [0, 0, sharp.a.data[2], sharp.a.data[3]],
        ],
        [[1], [0], [1], [0]],
        [[...broad.c.data, ...sharp.c.data]],
        [[0]],
      ),
    };
    const { value, frequency } = largestGain(both);
    expect(value).toBeCloseTo(1.7, 6);
    expect(frequency).toBeCloseTo(1e4, 2);
  });

  it('takes the higher of two peaks which differ by one part in a million, and either of two equal ones', () => {
    // Two equal resonators side by side in frequency, as two separate channels: the gain of a diagonal response is the larger.
    const channel = (w: number, height: number): number[][] => [
      [-0.02 * w, -w * w],
      [1, 0],
      [height * 0.02 * w * w, 0],
    ];
    const diagonal = (first: number, second: number): StateEquations => {
      const [a1, a2] = [channel(1, first), channel(50, second)];
      return systemOf(
        [
          [...a1[0], 0, 0],
          [...a1[1], 0, 0],
          [0, 0, ...a2[0]],
          [0, 0, ...a2[1]],
        ],
        [
          [1, 0],
          [0, 0],
          [0, 1],
          [0, 0],
        ],
        [
          [0, a1[2][0], 0, 0],
          [0, 0, 0, a2[2][0]],
        ],
        [
          [0, 0],
          [0, 0],
        ],
      );
    };
    const alone = 1 / Math.sqrt(1 - 1e-4);
    expect(largestGain(diagonal(1, 1.000001)).value / (1.000001 * alone)).toBeCloseTo(1, 10);
    expect(largestGain(diagonal(1, 1.000001)).frequency).toBeCloseTo(50 * Math.sqrt(1 - 2e-4), 5);
    expect(largestGain(diagonal(1.000001, 1)).frequency).toBeCloseTo(Math.sqrt(1 - 2e-4), 7);
    expect(largestGain(diagonal(1, 1)).value / alone).toBeCloseTo(1, 10);
  });

  it('is infinite for a system that is not stable, and the feedthrough for one without states', () => {
    expect(largestGain(loopOf([1], [1, 0]))).toEqual({
      value: Number.POSITIVE_INFINITY,
      frequency: undefined,
    });
    expect(largestGain(loopOf([1], [1, -1], 0.1)).value).toBe(Number.POSITIVE_INFINITY);
    expect(largestGain(loopOf([-3], [1])).value).toBe(3);
    expect(largestGain(loopOf([0], [1, 1])).value).toBe(0);
  });

  const lag = fc.record({
    poles: fc.array(fc.double({ min: -0.95, max: 0.95, noNaN: true }), { minLength: 1, maxLength: 5 }),
    zeros: fc.array(fc.double({ min: -2, max: 2, noNaN: true }), { maxLength: 4 }),
    angle: fc.double({ min: 0.1, max: 3, noNaN: true }),
    radius: fc.double({ min: 0.5, max: 0.999, noNaN: true }),
  });

  it('is reached at its frequency and exceeded nowhere on a dense grid', () => {
    fc.assert(
      fc.property(lag, ({ poles, zeros, angle, radius }) => {
        const numerator = product(...zeros.slice(0, poles.length + 1).map((zero) => [1, -zero]));
        const resonance = [1, -2 * radius * Math.cos(angle), radius * radius];
        const system = loopOf(numerator, product(resonance, ...poles.map((pole) => [1, -pole])), 1);
        const { value, frequency } = largestGain(system);
        const response = prepareResponse(system);
        const sizeAt = (w: number) => Math.hypot(response(w).real, response(w).imaginary);
        expect(sizeAt(frequency!) / value).toBeCloseTo(1, 12);
        for (let k = 0; k <= 500; k++)
          expect(sizeAt((Math.PI * k) / 500)).toBeLessThanOrEqual(value * (1 + 1e-9));
      }),
      { numRuns: 60 },
    );
  });

  it('of a sampled system does not depend on the period in which its time is counted', () => {
    fc.assert(
      fc.property(
        lag,
        fc.double({ min: 1e-5, max: 1e3, noNaN: true }),
        ({ poles, angle, radius }, period) => {
          const resonance = [1, -2 * radius * Math.cos(angle), radius * radius];
          const denominator = product(resonance, ...poles.map((pole) => [1, -pole]));
          const one = largestGain(loopOf([1], denominator, 1));
          const other = largestGain(loopOf([1], denominator, period));
          // The peak is proved to a share of 1e-10.
          expect(other.value / one.value).toBeCloseTo(1, 9);
        },
      ),
      { numRuns: 40 },
    );
  });
});

describe('singular values', () => {
  const entry = fc.record({
    real: fc.double({ min: -1, max: 1, noNaN: true }),
    imaginary: fc.double({ min: -1, max: 1, noNaN: true }),
  });

  it('give directions that belong to the value, and bound what any input gives', () => {
    const matrix = fc
      .tuple(fc.integer({ min: 1, max: 4 }), fc.integer({ min: 1, max: 4 }))
      .chain(([rows, columns]) =>
        fc.array(fc.array(entry, { minLength: columns, maxLength: columns }), {
          minLength: rows,
          maxLength: rows,
        }),
      );
    fc.assert(
      fc.property(matrix, (rows) => {
        const { value, input, output } = largestSingularValue(rows);
        const squares = rows.flat().reduce((sum, z) => sum + z.real ** 2 + z.imaginary ** 2, 0);
        expect(value).toBeLessThanOrEqual(Math.sqrt(squares) * (1 + 1e-12));
        expect(value ** 2 * Math.min(rows.length, rows[0].length)).toBeGreaterThanOrEqual(
          squares * (1 - 1e-12),
        );
        rows.forEach((row, i) => {
          const real = row.reduce(
            (s, z, j) => s + z.real * input[j].real - z.imaginary * input[j].imaginary,
            0,
          );
          const imaginary = row.reduce(
            (s, z, j) => s + z.real * input[j].imaginary + z.imaginary * input[j].real,
            0,
          );
          expect(Math.abs(real - value * output[i].real)).toBeLessThan(1e-12);
          expect(Math.abs(imaginary - value * output[i].imaginary)).toBeLessThan(1e-12);
        });
      }),
    );
  });
});

describe('the noise gain', () => {
  it(`F06: ${publishedCase('F06').title}`, () => {
    expectPublished('F06', 'norm', noiseGain(publishedSystem('F06')));
  });

  it('of a sampled lag is the closed form b/√(1 − a²), with its feedthrough added in squares', () => {
    expect(noiseGain(loopOf([0.2], [1, -0.9], 0.1))).toBeCloseTo(0.2 / Math.sqrt(1 - 0.81), 13);
    expect(noiseGain(systemOf([[0.9]], [[0.2]], [[1]], [[3]], 0.1))).toBeCloseTo(
      Math.sqrt(9 + 0.04 / 0.19),
      12,
    );
  });

  it('of a moving mean of n samples is 1/√n', () => {
    expect(noiseGain(loopOf([0.25, 0.25, 0.25, 0.25], [1, 0, 0, 0], 0.1))).toBeCloseTo(0.5, 14);
  });

  it('is infinite without stability, and for continuous white noise through a feedthrough', () => {
    expect(noiseGain(loopOf([1], [1, -1], 1))).toBe(Number.POSITIVE_INFINITY);
    expect(noiseGain(loopOf([1, 2], [1, 1]))).toBe(Number.POSITIVE_INFINITY);
    expect(noiseGain(loopOf([2], [1], 1))).toBe(2);
  });

  it('comes from a covariance that satisfies its equation, fast and slow states together', () => {
    const { a, b } = loopOf([1], product([1, 1e4], [1, 1e-3], [1, 2, 50]));
    const q = multiply(b, transpose(b));
    const p = stateCovariance(a, q, undefined);
    const left = add(multiply(a, p), multiply(p, transpose(a)));
    const size = Math.max(...multiply(a, p).data.map(Math.abs));
    for (const entry of add(left, q).data) expect(Math.abs(entry)).toBeLessThan(1e-9 * size);
    const sampled = holdEquivalent(
      systemOf(
        [
          [0, 1],
          [-4, -0.1],
        ],
        [[0], [1]],
        [[1, 0]],
        [[0]],
      ),
      0.3,
    );
    const s = stateCovariance(sampled.a, identity(2), 0.3);
    const residual = add(add(multiply(sampled.a, multiply(s, transpose(sampled.a))), identity(2)), s, -1);
    for (const entry of residual.data) expect(Math.abs(entry)).toBeLessThan(1e-11);
  });
});

describe('responses', () => {
  it('of several inputs and outputs are those of each pair', () => {
    const system = systemOf(
      [
        [-1, 2, 0],
        [0, -3, 1],
        [-4, 0, -2],
      ],
      [
        [1, 0],
        [0, 2],
        [1, 1],
      ],
      [
        [1, 0, 3],
        [0, 1, 0],
      ],
      [
        [0, 1],
        [2, 0],
      ],
    );
    const rows = prepareResponseMatrix(system)(1.7);
    for (const i of [0, 1]) {
      for (const j of [0, 1]) {
        const pair = {
          ...system,
          b: { rows: 3, columns: 1, data: system.b.data.filter((_, k) => k % 2 === j) },
          c: { rows: 1, columns: 3, data: system.c.data.slice(3 * i, 3 * i + 3) },
          d: { rows: 1, columns: 1, data: system.d.data.slice(2 * i + j, 2 * i + j + 1) },
        };
        const alone = responseAt(pair, 1.7);
        expect(rows[i][j].real).toBeCloseTo(alone.real, 14);
        expect(rows[i][j].imaginary).toBeCloseTo(alone.imaginary, 14);
      }
    }
  });

  it('keep their digits for slow poles under fast sampling', () => {
    // Closed form b/(e^{jωT} − 1 + ε) with the pole 1 − ε: at ω·T = 1e-9 it is b/(ε + jωT) to 1e-9.
    const epsilon = 2 ** -30;
    const { real, imaginary } = responseAt(loopOf([epsilon], [1, -(1 - epsilon)], 1e-6), 1e-3);
    const ratio = 1e-9 / epsilon;
    expect(real).toBeCloseTo(1 / (1 + ratio * ratio), 8);
    expect(imaginary).toBeCloseTo(-ratio / (1 + ratio * ratio), 8);
  });

  it('do not overflow along a long chain of weakly coupled states', () => {
    const lags = Array.from({ length: 40 }, () => [1, 1e-3]);
    const { a, b, c, d } = systemOf(
      lags.map(([, rate], i) => lags.map((_, j) => (i === j ? -rate : i === j + 1 ? 1e-9 : 0))),
      lags.map((_, i) => [i === 0 ? 1 : 0]),
      [lags.map((_, i) => (i === 39 ? 1 : 0))],
      [[0]],
    );
    // Closed form: 1e-9³⁹/(jω + 1e-3)⁴⁰ at ω = 1e-3 has the size 1e-351·1e120/2²⁰ = 9.5e-238.
    const { real, imaginary } = responseAt({ a, b, c, d, period: undefined }, 1e-3);
    expect(Math.hypot(real, imaginary) / (1e-231 / 2 ** 20)).toBeCloseTo(1, 9);
  });

  it('are refused at a pole and for several inputs, with the place', () => {
    expect(() => responseAt(loopOf([1], [1, 0]), 0)).toThrow(/response at 0 rad\/s is infinite/);
    expect(() => responseAt(systemOf([[-1]], [[1, 1]], [[1]], [[0, 0]]), 1)).toThrow(
      /the system has 2 and 1/,
    );
  });
});
