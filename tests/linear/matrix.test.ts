import fc from 'fast-check';
import { describe, expect, it } from 'vitest';
import { determinantOf } from '../../src/linear/determinant.js';
import {
  add,
  blockOf,
  columnSumNorm,
  fromRows,
  identity,
  multiply,
  place,
  scale,
  toRows,
  transpose,
  zeros,
} from '../../src/linear/matrix.js';
import { NumericFailure } from '../../src/linear/numeric_failure.js';
import { solve } from '../../src/linear/solve.js';
import { stateEquations } from '../../src/linear/state_equations.js';

describe('matrices', () => {
  const a = fromRows([
    [1, 2, 3],
    [4, 5, 6],
  ]);

  it('multiply, add, scale and transpose', () => {
    expect(multiply(a, transpose(a))).toEqual(
      fromRows([
        [14, 32],
        [32, 77],
      ]),
    );
    expect(add(a, a, -1)).toEqual(zeros(2, 3));
    expect(scale(a, 2)).toEqual(add(a, a));
    expect(multiply(a, identity(3))).toEqual(a);
    expect(columnSumNorm(a)).toBe(9);
  });

  it('take blocks in and give them out', () => {
    const target = zeros(3, 4);
    place(target, a, 1, 1);
    expect(blockOf(target, 1, 1, 2, 3)).toEqual(a);
    expect([...target.data]).toEqual([0, 0, 0, 0, 0, 1, 2, 3, 0, 4, 5, 6]);
    expect(() => place(target, a, 2, 0)).toThrow(/2 x 3 at \(2, 0\) does not fit into 3 x 4/);
  });

  it('say which sizes do not fit', () => {
    expect(() => multiply(a, a)).toThrow(/2 x 3 by 2 x 3/);
    expect(() => add(a, transpose(a))).toThrow(/2 x 3 and 3 x 2/);
    expect(() => fromRows([[1, 2], [3]])).toThrow(/row 1 .* 1 entries where 2/);
  });

  it('have no rows when there are no states', () => {
    expect(fromRows([], 2)).toEqual(zeros(0, 2));
    expect(multiply(zeros(2, 0), zeros(0, 2))).toEqual(zeros(2, 2));
  });
});

describe('linear equations', () => {
  it('are solved with a pivot of zero in the first place', () => {
    expect([
      ...solve(
        fromRows([
          [0, 2],
          [4, 0],
        ]),
        fromRows([[6], [8]]),
      ).data,
    ]).toEqual([2, 3]);
  });

  it('are refused when singular or not square', () => {
    expect(() =>
      solve(
        fromRows([
          [1, 2],
          [2, 4],
        ]),
        identity(2),
      ),
    ).toThrow(NumericFailure);
    expect(() =>
      solve(
        fromRows([
          [1, 2],
          [2, 4],
        ]),
        identity(2),
      ),
    ).toThrow(/pivot 2 of 2 is 0/);
    expect(() => solve(fromRows([[Number.NaN]]), identity(1))).toThrow(/NaN/);
    expect(() => solve(zeros(2, 3), identity(2))).toThrow(/2 x 3/);
  });

  it('leave a residual of rounding size', () => {
    const system = fc
      .integer({ min: 1, max: 7 })
      .chain((n) =>
        fc.array(fc.double({ min: -1, max: 1, noNaN: true }), { minLength: n * n + n, maxLength: n * n + n }),
      );
    fc.assert(
      fc.property(system, (entries) => {
        const n = Math.floor(Math.sqrt(entries.length));
        const square = { rows: n, columns: n, data: Float64Array.from(entries.slice(0, n * n)) };
        const a = add(square, identity(n), 2 * n);
        const b = { rows: n, columns: 1, data: Float64Array.from(entries.slice(n * n)) };
        expect(columnSumNorm(add(multiply(a, solve(a, b)), b, -1))).toBeLessThan(1e-14 * n);
      }),
    );
  });
});

describe('determinants', () => {
  const size = 4;
  const entry = fc.double({ min: -3, max: 3, noNaN: true });
  const square = fc
    .array(fc.array(entry, { minLength: size, maxLength: size }), { minLength: size, maxLength: size })
    .map((rows) => fromRows(rows));

  it('are those of products, and change sign where two rows change places', () => {
    fc.assert(
      fc.property(square, square, (a, b) => {
        expect(determinantOf(multiply(a, b))).toBeCloseTo(determinantOf(a) * determinantOf(b), 6);
        const rows = toRows(a);
        const swapped = fromRows([rows[1], rows[0], rows[2], rows[3]]);
        expect(determinantOf(swapped)).toBeCloseTo(-determinantOf(a), 9);
      }),
    );
  });

  it('are one of the identity, zero where a row is one of the others, and none where a matrix is not square', () => {
    expect(determinantOf(identity(3))).toBe(1);
    expect(
      determinantOf(
        fromRows([
          [1, 2],
          [2, 4],
        ]),
      ),
    ).toBe(0);
    expect(
      determinantOf(
        fromRows([
          [0, 2],
          [3, 4],
        ]),
      ),
    ).toBe(-6);
    expect(() => determinantOf(zeros(2, 3))).toThrow('2 x 3 has no determinant');
  });
});

describe('state equations', () => {
  it('are checked for size and period, and get a feedthrough of zero', () => {
    const system = stateEquations(identity(2), zeros(2, 1), zeros(3, 2), undefined, 0.1);
    expect(system.d).toEqual(zeros(3, 1));
    expect(() => stateEquations(identity(2), zeros(1, 1), zeros(1, 2))).toThrow(
      /matrix b is 1 x 1 where 2 x 1/,
    );
    expect(() => stateEquations(zeros(2, 3), zeros(2, 1), zeros(1, 2))).toThrow(/matrix a is 2 x 3/);
    expect(() => stateEquations(identity(2), zeros(2, 1), zeros(1, 2), undefined, 0)).toThrow(/0 s/);
  });
});
