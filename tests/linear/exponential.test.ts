import fc from 'fast-check';
import { describe, expect, it } from 'vitest';
import { discretise, exponential } from '../../src/linear/exponential.js';
import {
  add,
  columnSumNorm,
  fromRows,
  identity,
  type Matrix,
  multiply,
  scale,
  transpose,
  zeros,
} from '../../src/linear/matrix.js';
import { NumericFailure } from '../../src/linear/numeric_failure.js';
import { expectPublished, publishedCase } from '../published.js';

const squareMatrix = (largest: number): fc.Arbitrary<Matrix> =>
  fc.integer({ min: 1, max: 6 }).chain((n) =>
    fc
      .array(fc.double({ min: -largest, max: largest, noNaN: true }), {
        minLength: n * n,
        maxLength: n * n,
      })
      .map((entries) => ({ rows: n, columns: n, data: Float64Array.from(entries) })),
  );

function distance(a: Matrix, b: Matrix): number {
  return columnSumNorm(add(a, b, -1));
}

describe('the matrix exponential', () => {
  // Moler and Van Loan, 1978: cancellation, one chain of four equal eigenvalues, and a stiff pair.
  it('holds against the published hard cases', () => {
    const plain = exponential(fromRows(publishedCase('L01').given.matrix));
    expectPublished('L01', 'exponential', [...plain.data]);
    for (const id of ['L02', 'L03']) {
      const { matrix, time_s: time } = publishedCase(id).given;
      expectPublished(id, 'exponential', [...exponential(scale(fromRows(matrix), time)).data]);
    }
  });

  it('turns a rotation generator into sine and cosine', () => {
    const angle = 2.3;
    const { data } = exponential(
      fromRows([
        [0, -angle],
        [angle, 0],
      ]),
    );
    const expected = [Math.cos(angle), -Math.sin(angle), Math.sin(angle), Math.cos(angle)];
    expected.forEach((entry, i) => {
      expect(data[i]).toBeCloseTo(entry, 14);
    });
  });

  it('ends a nilpotent series exactly', () => {
    const { data } = exponential(
      fromRows([
        [0, 3, 0],
        [0, 0, 3],
        [0, 0, 0],
      ]),
    );
    expect([...data]).toEqual([1, 3, 4.5, 0, 1, 3, 0, 0, 1]);
  });

  it('keeps its digits when states have very different units', () => {
    // A similarity by diag(1, 1e9) of the rotation generator: the exponential is known by the same similarity.
    const { data } = exponential(
      fromRows([
        [0, -1e-9],
        [1e9, 0],
      ]),
    );
    expect(data[0]).toBeCloseTo(Math.cos(1), 14);
    expect(data[1] / (-1e-9 * Math.sin(1))).toBeCloseTo(1, 13);
    expect(data[2] / (1e9 * Math.sin(1))).toBeCloseTo(1, 13);
  });

  it('is the identity for the zero matrix, and empty for no states', () => {
    expect(exponential(zeros(3, 3))).toEqual(identity(3));
    expect(exponential(zeros(0, 0))).toEqual(zeros(0, 0));
  });

  it('refuses what has no exponential, and says what was given', () => {
    expect(() => exponential(zeros(2, 3))).toThrow(/2 x 3/);
    expect(() => exponential(fromRows([[Number.NaN]]))).toThrow(NumericFailure);
    expect(() => exponential(fromRows([[1e6]]))).toThrow(/not finite/);
  });

  it('exp(A)·exp(−A) = 1 within conditioning', () => {
    fc.assert(
      fc.property(squareMatrix(3), (a) => {
        const forth = exponential(a);
        const back = exponential(scale(a, -1));
        const bound = 1e-13 * columnSumNorm(forth) * columnSumNorm(back) * (1 + columnSumNorm(a));
        expect(distance(multiply(forth, back), identity(a.rows))).toBeLessThanOrEqual(bound);
      }),
    );
  });

  it('exp(A(t + s)) = exp(At)·exp(As)', () => {
    const time = fc.double({ min: 0, max: 2, noNaN: true });
    fc.assert(
      fc.property(squareMatrix(2), time, time, (a, t, s) => {
        const both = multiply(exponential(scale(a, t)), exponential(scale(a, s)));
        const size = columnSumNorm(exponential(scale(a, t))) * columnSumNorm(exponential(scale(a, s)));
        const bound = 1e-13 * size * (1 + columnSumNorm(a));
        expect(distance(exponential(scale(a, t + s)), both)).toBeLessThanOrEqual(bound);
      }),
    );
  });

  it('commutes with transposition', () => {
    fc.assert(
      fc.property(squareMatrix(3), (a) => {
        const one = exponential(transpose(a));
        const other = transpose(exponential(a));
        expect(distance(one, other)).toBeLessThanOrEqual(
          1e-12 * (1 + columnSumNorm(a)) * Math.exp(columnSumNorm(a)),
        );
      }),
    );
  });
});

describe('the exact movement with a constant input', () => {
  it('is the closed form for a lag', () => {
    const { phi, gamma } = discretise(fromRows([[-4]]), fromRows([[4]]), 0.3);
    expect(phi.data[0]).toBeCloseTo(Math.exp(-1.2), 15);
    expect(gamma.data[0]).toBeCloseTo(-Math.expm1(-1.2), 15);
  });

  it('in two parts is the movement in one', () => {
    fc.assert(
      fc.property(squareMatrix(2), fc.double({ min: 0, max: 1, noNaN: true }), (a, share) => {
        const b = fromRows(Array.from({ length: a.rows }, (_, i) => [i - 1]));
        const whole = discretise(a, b, 1);
        const first = discretise(a, b, share);
        const second = discretise(a, b, 1 - share);
        const gamma = add(multiply(second.phi, first.gamma), second.gamma);
        const size = 1e-12 * Math.exp(columnSumNorm(a)) * 10;
        expect(distance(whole.gamma, gamma)).toBeLessThanOrEqual(size);
      }),
    );
  });

  it('refuses sizes that do not fit', () => {
    expect(() => discretise(zeros(2, 2), zeros(3, 1), 1)).toThrow(/2 x 2.*3 x 1/);
  });
});
