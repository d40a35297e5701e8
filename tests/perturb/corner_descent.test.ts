import fc from 'fast-check';
import { describe, expect, it } from 'vitest';
import { cornerDescent } from '../../src/perturb/corner_descent.js';
import { Trials } from '../../src/perturb/trials.js';

const box = (size: number) => ({
  least: new Array<number>(size).fill(-1),
  most: new Array<number>(size).fill(1),
});

async function descend(size: number, headroom: (x: Float64Array) => number, start = new Float64Array(size)) {
  const trials = new Trials(async (moves) => moves.map(headroom), 10_000);
  const found = await cornerDescent({ move: start, rank: headroom(start) }, box(size), trials);
  return { found, used: trials.used };
}

describe('going from corner to worse corner', () => {
  it('finds the one corner of ten parameters that adds up, in two rounds', async () => {
    const signs = [1, -1, -1, 1, 1, -1, 1, -1, -1, -1];
    const { found, used } = await descend(10, (x) => -x.reduce((sum, value, k) => sum + value * signs[k], 0));
    expect([...found.move]).toEqual(signs);
    expect(used).toBeLessThanOrEqual(45);
  });

  it('finds one corner of twenty that must be complete to break', async () => {
    const { found, used } = await descend(
      20,
      (x) => 0.5 - x.reduce((all, value) => (all * (1 + value)) / 2, 1),
    );
    expect(found.rank).toBe(-0.5);
    expect(used).toBeLessThanOrEqual(85);
  });

  it('does not take all single moves together where that is no worse', async () => {
    // Either move alone makes it worse, both together better.
    const { found } = await descend(
      2,
      (x) => 1 - Math.abs(x[0]) - Math.abs(x[1]) + 4 * Math.abs(x[0] * x[1]),
    );
    expect([...found.move].filter((value) => value !== 0)).toHaveLength(1);
    expect(found.rank).toBe(0);
  });

  it('stays where it is when nothing is worse', async () => {
    const { found } = await descend(3, (x) => x.reduce((sum, value) => sum + value * value, 0));
    expect([...found.move]).toEqual([0, 0, 0]);
  });

  it('never ends at a better plant than it began with, nor at one that a single end would make worse', async () => {
    const weights = fc.array(fc.double({ min: -1, max: 1, noNaN: true }), { minLength: 10, maxLength: 10 });
    await fc.assert(
      fc.asyncProperty(weights, async (w) => {
        const headroom = (x: Float64Array): number =>
          w[0] * x[0] +
          w[1] * x[1] +
          w[2] * x[2] +
          w[3] * x[0] * x[1] +
          w[4] * x[1] * x[2] +
          w[5] * x[0] * x[2];
        const { found } = await descend(3, headroom);
        expect(found.rank).toBeLessThanOrEqual(0);
        for (let k = 0; k < 3; k++) {
          for (const end of [-1, 1]) {
            expect(headroom(found.move.with(k, end))).toBeGreaterThanOrEqual(found.rank);
          }
        }
      }),
      { seed: 41 },
    );
  });
});
