import fc from 'fast-check';
import { describe, expect, it } from 'vitest';
import type { Complex } from '../../src/linear/complex.js';
import { eigenvalues } from '../../src/linear/eigenvalues.js';
import { add, fromRows, identity, type Matrix, multiply, scale, zeros } from '../../src/linear/matrix.js';
import { NumericFailure } from '../../src/linear/numeric_failure.js';
import { solve } from '../../src/linear/solve.js';
import { expectPublished, publishedCase } from '../published.js';

const descending = (values: Complex[]) => values.map(({ real }) => real).sort((a, b) => b - a);

/** Largest distance in the best greedy pairing of two lists. */
function mismatch(one: Complex[], other: Complex[]): number {
  const left = [...other];
  let worst = 0;
  for (const value of one) {
    const distances = left.map(({ real, imaginary }) =>
      Math.hypot(real - value.real, imaginary - value.imaginary),
    );
    const nearest = distances.indexOf(Math.min(...distances));
    worst = Math.max(worst, distances[nearest]);
    left.splice(nearest, 1);
  }
  return worst;
}

describe('eigenvalues', () => {
  // Wilkinson, 1963. From the coefficients in powers of x nothing could be had in double precision; in the basis of the
  // products (x − 1)…(x − k) the perturbed polynomial is well conditioned: x¹⁹ has Stirling numbers as coefficients there.
  it('finds the roots of the perturbed polynomial with roots 1 to 20', () => {
    const rows = Array.from({ length: 20 }, (_, k) =>
      Array.from({ length: 20 }, (_, j) => (j === k ? k + 1 : j === k + 1 ? 1 : 0)),
    );
    const perturbation = publishedCase('L04').given.perturbation_of_x19;
    stirling(20).forEach((coefficient, k) => {
      rows[19][k] -= perturbation * coefficient;
    });
    const roots = eigenvalues(fromRows(rows));
    const upper = roots.filter(({ imaginary }) => imaginary > 0).sort((a, b) => a.real - b.real);
    expectPublished('L04', 'number_of_real_roots', roots.filter(({ imaginary }) => imaginary === 0).length);
    expectPublished('L04', 'largest_real_root', descending(roots)[0]);
    expectPublished(
      'L04',
      'real_parts',
      upper.map(({ real }) => real),
    );
    expectPublished(
      'L04',
      'imaginary_parts',
      upper.map(({ imaginary }) => imaginary),
    );
  });

  // Frank, 1958.
  it('finds the eigenvalues of the Frank matrix', () => {
    const { order } = publishedCase('L05').given;
    const frank = fromRows(
      Array.from({ length: order }, (_, i) =>
        Array.from({ length: order }, (_, j) => (j >= i - 1 ? order - Math.max(i, j) : 0)),
      ),
    );
    const values = descending(eigenvalues(frank));
    // The small ones have condition numbers of 1e7, so no method that rounds to double precision keeps 1e-9.
    expectPublished('L05', 'eigenvalues', values, 3e-8);
    expectPublished('L05', 'largest', values[0]);
    expectPublished('L05', 'smallest', values[order - 1]);
    expectPublished(
      'L05',
      'determinant',
      values.reduce((total, value) => total * value, 1),
    );
  });

  it('of a triangular matrix are its diagonal, exactly', () => {
    const values = descending(
      eigenvalues(
        fromRows([
          [3, 5, 7],
          [0, -2, 1e6],
          [0, 0, 1],
        ]),
      ),
    );
    expect(values).toEqual([3, 1, -2]);
  });

  it('of a rotation come as a conjugate pair', () => {
    const [one, other] = eigenvalues(
      fromRows([
        [0.6, -0.8],
        [0.8, 0.6],
      ]),
    );
    expect(one).toEqual({ real: other.real, imaginary: -other.imaginary });
    expect(one.real).toBeCloseTo(0.6, 15);
    expect(Math.abs(one.imaginary)).toBeCloseTo(0.8, 15);
  });

  it('of a cyclic shift, which the plain shifts of the method leave unchanged, are the roots of one', () => {
    const n = 7;
    const shift = zeros(n, n);
    for (let i = 0; i < n; i++) shift.data[i * n + ((i + 1) % n)] = 1;
    const roots = Array.from({ length: n }, (_, k) => ({
      real: Math.cos((2 * Math.PI * k) / n),
      imaginary: Math.sin((2 * Math.PI * k) / n),
    }));
    expect(mismatch(eigenvalues(shift), roots)).toBeLessThan(1e-14);
  });

  it('of a chain of delays are zero, all of them', () => {
    const chain = fromRows([
      [0, 0, 0],
      [1, 0, 0],
      [0, 1, 0],
    ]);
    expect(eigenvalues(chain)).toEqual(Array(3).fill({ real: 0, imaginary: 0 }));
  });

  it('do not depend on the units of the states', () => {
    const scaled = fromRows([
      [-1, 2e8, 0],
      [-3e-8, -2, 4e-5],
      [0, 1e5, -3],
    ]);
    const plain = fromRows([
      [-1, 2, 0],
      [-3, -2, 4],
      [0, 1, -3],
    ]);
    expect(mismatch(eigenvalues(scaled), eigenvalues(plain))).toBeLessThan(1e-13);
  });

  it('are found when entries are so small that products of them are zero', () => {
    // Found by the property below: against such neighbours no entry ever counts as negligible, only against the whole matrix.
    const a = fromRows([
      [5.314303379606131e-185, -1.0738725584583691e-190, 0],
      [2.025642943041036e-229, 0, 0],
      [0, 0, 0],
    ]);
    const basis = fromRows([
      [9, 0, 0],
      [0, 9, -1.4370166593971313e-23],
      [-9.595192433333902e-80, 0, 9],
    ]);
    const values = eigenvalues(solve(basis, multiply(a, basis)));
    for (const { real, imaginary } of values) expect(Math.hypot(real, imaginary)).toBeLessThan(1e-184);
  });

  it('keep their digits where the diagonal is large against the couplings on one side', () => {
    const plain = [
      [0.95, 0.32, 0, 0],
      [-0.32, 0.95, 0, 0],
      [0, 0, 0.14, 0.99],
      [0.07, 0.39, -0.99, 0.14],
    ];
    const units = [1, 1e3, 1e6, 1e-6];
    const scaled = plain.map((row, i) => row.map((entry, j) => (entry * units[j]) / units[i]));
    expect(mismatch(eigenvalues(fromRows(scaled)), eigenvalues(fromRows(plain)))).toBeLessThan(1e-14);
  });

  it('refuses a matrix that is not square or not finite, and names the entry', () => {
    expect(() => eigenvalues(zeros(2, 3))).toThrow(/2 x 3/);
    expect(() =>
      eigenvalues(
        fromRows([
          [1, 2],
          [Number.POSITIVE_INFINITY, 0],
        ]),
      ),
    ).toThrow(/\(1, 0\).*Infinity/);
    expect(() => eigenvalues(fromRows([[Number.NaN]]))).toThrow(NumericFailure);
    expect(eigenvalues(zeros(0, 0))).toEqual([]);
  });

  const entries = (n: number) =>
    fc.array(fc.double({ min: -1, max: 1, noNaN: true }), { minLength: n * n, maxLength: n * n });
  const matrices = fc.integer({ min: 1, max: 8 }).chain((n) =>
    fc.tuple(entries(n), entries(n)).map(([a, q]) => ({
      a: { rows: n, columns: n, data: Float64Array.from(a) } as Matrix,
      basis: add(scale(identity(n), 3 * n), { rows: n, columns: n, data: Float64Array.from(q) }),
    })),
  );

  it('are unchanged by a change of basis, and have the trace as their sum', () => {
    fc.assert(
      fc.property(matrices, ({ a, basis }) => {
        const turned = solve(basis, multiply(a, basis));
        // A multiple eigenvalue moves by the n-th root of the rounding error, hence the wide bound.
        const bound = 40 * Number.EPSILON ** (1 / a.rows);
        expect(mismatch(eigenvalues(a), eigenvalues(turned))).toBeLessThan(bound);
        let trace = 0;
        for (let i = 0; i < a.rows; i++) trace += a.data[i * a.rows + i];
        const sum = eigenvalues(a).reduce((total, { real }) => total + real, 0);
        expect(Math.abs(sum - trace)).toBeLessThan(1e-13 * a.rows);
      }),
    );
  });

  it('come in conjugate pairs', () => {
    fc.assert(
      fc.property(matrices, ({ a }) => {
        const values = eigenvalues(a);
        for (const { real, imaginary } of values) {
          expect(values.some((other) => other.real === real && other.imaginary === -imaginary)).toBe(true);
        }
      }),
    );
  });
});

/** Stirling numbers of the second kind {n, 1} … {n, n}: coefficients of xⁿ⁻¹ over the products (x − 1)…(x − k). */
function stirling(n: number): number[] {
  let row = [1];
  for (let k = 2; k <= n; k++) {
    row = Array.from({ length: k }, (_, j) => (j + 1) * (row[j] ?? 0) + (row[j - 1] ?? 0));
  }
  return row;
}
