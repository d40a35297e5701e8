import { describe, expect, it } from 'vitest';
import { sobolDimensions, sobolPoints } from '../../src/perturb/sobol_points.js';
import reference from './scipy_values.json' with { type: 'json' };

function first(count: number, dimensions: number): Float64Array[] {
  const points = sobolPoints(dimensions);
  return Array.from({ length: count }, () => points.next().value);
}

describe('the Sobol sequence', () => {
  // Outside source: scipy.stats.qmc.Sobol, which uses the same published direction numbers (Joe and Kuo 2008).
  it.each(Object.entries(reference.points))(
    'point %s in 40 dimensions is the published one',
    (index, point) => {
      expect([...first(Number(index) + 1, sobolDimensions)[Number(index)]]).toEqual(point);
    },
  );

  it('fills every one-dimensional projection evenly in blocks of powers of two', () => {
    for (const m of [3, 6, 9]) {
      const points = first(2 ** m, sobolDimensions);
      for (let i = 0; i < sobolDimensions; i++) {
        const cells = points.map((point) => Math.floor(point[i] * 2 ** m)).sort((a, b) => a - b);
        expect(cells).toEqual(cells.map((_, k) => k));
      }
    }
  });

  // Sobol 1967: the first two dimensions are a (0, 2)-sequence: every elementary box of 2^m points holds exactly one.
  it('puts one point in every elementary box of its first two dimensions', () => {
    const m = 8;
    const points = first(2 ** m, 2);
    for (let rows = 0; rows <= m; rows++) {
      const boxes = new Set(
        points.map(([x, y]) => `${Math.floor(x * 2 ** rows)} ${Math.floor(y * 2 ** (m - rows))}`),
      );
      expect(boxes.size).toBe(2 ** m);
    }
  });

  it('integrates a smooth function far better than a square root of the number of points', () => {
    const dimensions = 8;
    const points = first(4096, dimensions);
    const mean =
      points.reduce((sum, point) => sum + point.reduce((product, x) => product * (0.5 + x), 1), 0) / 4096;
    // The integral is 1; independent points would leave an error of about 0.015.
    expect(Math.abs(mean - 1)).toBeLessThan(0.002);
  });

  it('says how many dimensions it has', () => {
    expect(() => sobolPoints(41).next()).toThrow('41');
    expect(() => sobolPoints(0).next()).toThrow('expected 1 to 40');
  });
});
