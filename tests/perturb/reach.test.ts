import { describe, expect, it } from 'vitest';
import { fromRows } from '../../src/linear/matrix.js';
import { polesOf } from '../../src/linear/poles.js';
import { type Reach, reachAlong } from '../../src/perturb/reach.js';
import { Trials } from '../../src/perturb/trials.js';
import { publishedCase } from '../published.js';

function reach(headroom: (x: Float64Array) => number, directions: number[][], budget = 500): Promise<Reach> {
  const trials = new Trials(async (moves) => moves.map(headroom), budget);
  return reachAlong(
    directions.map((move) => Float64Array.from(move)),
    trials,
  );
}

/** How far the slowest root of a polynomial (descending powers) lies left of the imaginary axis. */
function reserve(polynomial: number[]): number {
  const n = polynomial.length - 1;
  const rows = Array.from({ length: n }, (_, i) =>
    Array.from({ length: n }, (__, j) =>
      i === 0 ? -polynomial[j + 1] / polynomial[0] : Number(i === j + 1),
    ),
  );
  return Math.min(...polesOf(fromRows(rows), undefined).map(({ real }) => -real));
}

/** The reach of relative bounds of ±20 % on the coefficients, times 20 %: the published largest half width. */
async function largestHalfWidth(nominal: number[], uncertain: boolean[]): Promise<number> {
  const free = uncertain.flatMap((is, i) => (is ? [i] : []));
  const headroom = (x: Float64Array): number => {
    const polynomial = nominal.slice();
    free.forEach((i, k) => {
      polynomial[i] *= 1 + 0.2 * x[k];
    });
    return reserve(polynomial);
  };
  const corners = Array.from({ length: 2 ** free.length }, (_, code) =>
    free.map((__, k) => ((code >> k) & 1 ? 1 : -1)),
  );
  const { factor, found } = await reach(headroom, corners, 5000);
  expect(found).toBe(true);
  return 0.2 * factor;
}

describe('the reach of the bounds', () => {
  // Kharitonov 1978: the largest equal relative half width at which the family stays stable is reached at a corner.
  it.each(['G01', 'G02'])(
    '%s: the published stability radius, to the resolution of a thousandth',
    async (id) => {
      const { given, expect: figures } = publishedCase(id);
      const uncertain = given.uncertain ?? given.nominal.map(() => true);
      const found = await largestHalfWidth(given.nominal, uncertain);
      const published = figures.largest_relative_half_width.value as number;
      expect(found).toBeGreaterThanOrEqual(published * (1 - 1e-9));
      expect(found).toBeLessThanOrEqual(published * 1.001);
    },
  );

  it('below one where a break lies inside the bounds', async () => {
    const { factor, found } = await reach(
      (x) => 0.4 - x[0],
      [
        [1, 0],
        [0.2, 0.1],
      ],
    );
    expect(found).toBe(true);
    expect(factor).toBeCloseTo(0.4, 3);
  });

  it('takes the nearest of the directions', async () => {
    const headroom = (x: Float64Array): number => 3 - Math.max(x[0], 2 * x[1]);
    expect(
      (
        await reach(headroom, [
          [1, 0],
          [0, 1],
        ])
      ).factor,
    ).toBeCloseTo(1.5, 2);
    expect((await reach(headroom, [[1, 0]])).factor).toBeCloseTo(3, 2);
  });

  it('says how far was looked where no break was found', async () => {
    expect(await reach(() => 1, [[1, 1]])).toEqual({ factor: 3, found: false });
  });

  it('is nothing where the nominal plant breaks', async () => {
    expect(await reach(() => -1, [[1, 1]])).toEqual({ factor: 0, found: true });
  });

  it('does not call a spent budget a reach that was looked at', async () => {
    const { factor, found } = await reach((x) => 10 - x[0], [[1]], 3);
    expect(found).toBe(false);
    expect(factor).toBeLessThanOrEqual(1.1);
  });
});
