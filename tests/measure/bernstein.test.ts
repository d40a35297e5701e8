import fc from 'fast-check';
import { describe, expect, it } from 'vitest';
import {
  differences,
  integralOf,
  partOf,
  productOf,
  signChanges,
  valueAt,
} from '../../src/measure/bernstein.js';

const place = fc.double({ min: 0, max: 1, noNaN: true });
const points = fc.array(fc.double({ min: -10, max: 10, noNaN: true }), { minLength: 2, maxLength: 8 });

/** The control points of a product of linear factors s − root. */
function withRoots(roots: number[]): number[] {
  return roots.reduce<number[]>((product, root) => productOf(product, [-root, 1 - root]), [1]);
}

describe('polynomials by their control points', () => {
  it('have the values of their definition', () => {
    // Degree three: p₀(1 − s)³ + 3p₁s(1 − s)² + 3p₂s²(1 − s) + p₃s³.
    fc.assert(
      fc.property(place, (s) => {
        const [p0, p1, p2, p3] = [1, -2, 5, 0.5];
        const r = 1 - s;
        const expected = p0 * r ** 3 + 3 * p1 * s * r ** 2 + 3 * p2 * s ** 2 * r + p3 * s ** 3;
        expect(valueAt([p0, p1, p2, p3], s)).toBeCloseTo(expected, 12);
      }),
    );
  });

  it('start and end at their first and last point, and stay between the least and the greatest', () => {
    fc.assert(
      fc.property(points, place, (p, s) => {
        // Equal as numbers: a zero may lose its sign.
        expect(valueAt(p, 0) === p[0]).toBe(true);
        expect(valueAt(p, 1) === p[p.length - 1]).toBe(true);
        const value = valueAt(p, s);
        expect(value).toBeGreaterThanOrEqual(Math.min(...p) - 1e-12);
        expect(value).toBeLessThanOrEqual(Math.max(...p) + 1e-12);
      }),
    );
  });

  it('stay what they are where all points are one value', () => {
    fc.assert(
      fc.property(fc.double({ noNaN: true, noDefaultInfinity: true }), place, (value, s) => {
        expect(valueAt([value, value, value, value, value, value], s) === value).toBe(true);
      }),
    );
  });

  it('have parts with the same values', () => {
    fc.assert(
      fc.property(points, place, place, place, (p, x, y, s) => {
        const [a, b] = [Math.min(x, y), Math.max(x, y)];
        const part = partOf(p, a, b);
        expect(valueAt(part, s)).toBeCloseTo(valueAt(p, a + s * (b - a)), 9);
      }),
    );
  });

  it('have integrals that add up over their parts', () => {
    fc.assert(
      fc.property(points, place, (p, cut) => {
        const parts = cut * integralOf(partOf(p, 0, cut)) + (1 - cut) * integralOf(partOf(p, cut, 1));
        expect(parts).toBeCloseTo(integralOf(p), 10);
      }),
    );
  });

  it('multiply by value', () => {
    fc.assert(
      fc.property(points, points, place, (p, q, s) => {
        expect(valueAt(productOf(p, q), s)).toBeCloseTo(valueAt(p, s) * valueAt(q, s), 8);
      }),
    );
  });

  it('have as their slope the differences times the degree', () => {
    const p = [0, 0, 1, 4, 2, -1];
    const h = 1e-6;
    for (const s of [0.1, 0.5, 0.83]) {
      const slope = (valueAt(p, s + h) - valueAt(p, s - h)) / (2 * h);
      expect(valueAt(differences(p), s) * 5).toBeCloseTo(slope, 6);
    }
  });
});

describe('changes of sign', () => {
  const root = fc.double({ min: 0.01, max: 0.99, noNaN: true });

  it('are found where they are, however many', () => {
    fc.assert(
      fc.property(fc.uniqueArray(root, { minLength: 1, maxLength: 5 }), (roots) => {
        const sorted = [...roots].sort((a, b) => a - b);
        fc.pre(sorted.every((value, i) => i === 0 || value - sorted[i - 1] > 1e-2));
        const found = signChanges(withRoots(sorted));
        expect(found).toHaveLength(sorted.length);
        found.forEach((place, i) => {
          expect(Math.abs(place - sorted[i])).toBeLessThan(1e-8);
        });
      }),
    );
  });

  it('are none where zero is only touched, or lies outside', () => {
    expect(signChanges(withRoots([0.3, 0.3]).map((p) => p + 1e-9))).toEqual([]);
    expect(signChanges(withRoots([-0.5, 1.5]))).toEqual([]);
    expect(signChanges([0, 0, 0])).toEqual([]);
    expect(signChanges([1])).toEqual([]);
  });

  it('are found in the very middle, where a half begins and ends', () => {
    const found = signChanges(withRoots([0.25, 0.5, 0.75]));
    expect(found).toHaveLength(3);
    for (const [i, root] of [0.25, 0.5, 0.75].entries()) expect(found[i]).toBeCloseTo(root, 12);
    // Exactly zero there, and a change of sign.
    expect(signChanges([-1, 2, -2, 1])).toHaveLength(3);
    expect(signChanges([-1, 0, 1])).toEqual([0.5]);
  });
});
