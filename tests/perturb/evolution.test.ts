import { xoroshiro128plus } from 'pure-rand/generator/xoroshiro128plus';
import { describe, expect, it } from 'vitest';
import { evolve } from '../../src/perturb/evolution.js';
import { Trials } from '../../src/perturb/trials.js';

async function search(size: number, headroom: (x: Float64Array) => number, mostTrials = 20_000, seed = 1) {
  const trials = new Trials(async (moves) => moves.map(headroom), 100_000);
  const box = { least: new Array<number>(size).fill(-1), most: new Array<number>(size).fill(1) };
  const start = new Float64Array(size).fill(0.8);
  const options = { start, width: 0.3, resolution: 1e-9, mostTrials };
  const worst = await evolve(options, box, trials, xoroshiro128plus(seed));
  return { worst: worst!, used: trials.used };
}

describe('local search by covariance matrix adaptation', () => {
  it.each([1, 2, 5, 10])('converges on a sphere of %i parameters', async (size) => {
    const { worst } = await search(size, (x) => x.reduce((sum, value) => sum + (value - 0.1) ** 2, 0));
    expect(worst.rank).toBeLessThan(1e-12);
  });

  it('learns the shape of an ellipsoid a thousand times longer than wide', async () => {
    const { worst, used } = await search(5, (x) =>
      x.reduce((sum, value, k) => sum + 10 ** (1.5 * k) * value ** 2, 0),
    );
    expect(worst.rank).toBeLessThan(1e-10);
    expect(used).toBeLessThan(6000);
  });

  it('depends on the order of the ranks alone', async () => {
    const sphere = (x: Float64Array): number => x.reduce((sum, value) => sum + value * value, 0);
    const [a, b] = [await search(3, sphere, 300), await search(3, (x) => Math.log(sphere(x)), 300)];
    expect(a.worst.move).toEqual(b.worst.move);
  });

  it('reaches a corner exactly', async () => {
    const { worst } = await search(4, (x) => x[0] - x[1] + x[2] - x[3], 2000);
    expect([...worst.move]).toEqual([-1, 1, -1, 1]);
  });

  it('ends by itself on a plain', async () => {
    const { used } = await search(3, () => 1);
    expect(used).toBeLessThan(500);
  });

  it('is another for another seed and the same for the same', async () => {
    const sphere = (x: Float64Array): number => x[0] ** 2 + x[1] ** 2;
    const of = async (seed: number) => (await search(2, sphere, 50, seed)).worst.move;
    expect(await of(1)).toEqual(await of(1));
    expect(await of(1)).not.toEqual(await of(2));
  });
});
