import { describe, expect, it } from 'vitest';
import { findWorst } from '../../src/perturb/find_worst.js';
import { ParameterSpace } from '../../src/perturb/parameter_space.js';
import { plantsToTry } from '../../src/perturb/plants.js';
import { type Ranked, Trials } from '../../src/perturb/trials.js';
import { expectPublished, publishedCase } from '../published.js';
import { type Box, boxes } from './boxes.js';
import { unitBox } from './parameters.js';

const budget = 2000;

/** Everything a run does to find the worst: the plants to try, then the search with what is left of the budget. */
async function worstOf({ size, headroom }: Pick<Box, 'size' | 'headroom'>, seed: number): Promise<Trials> {
  const space = new ParameterSpace(unitBox(size));
  const known: Ranked[] = [...plantsToTry(space, { plants: 100, seed, confidence: 0.95 })].map(
    ({ values }) => ({
      move: values,
      rank: headroom(values),
    }),
  );
  const trials = new Trials(async (moves) => moves.map(headroom), budget - known.length, known);
  await findWorst(known, space, trials, seed);
  return trials;
}

describe('the search for the worst', () => {
  it.each(boxes)('finds it within 2,000 evaluations, on 20 seeds of 20: $title', async (box) => {
    const missed: string[] = [];
    for (let seed = 1; seed <= 20; seed++) {
      const { worst } = await worstOf(box, seed);
      const breaks = worst!.rank < 0;
      const near = worst!.rank - box.worst < Math.max(0.1 * Math.abs(box.worst), 1e-3);
      if (!(breaks && near)) missed.push(`seed ${seed}: ${worst!.rank}`);
    }
    expect(missed).toEqual([]);
  });
});

// Source: closed forms of reference/published, case G08: an integrator with dead time over a box of gain and delay.
describe('the worst margins of a published box', () => {
  const { gain_per_s, delay_s } = publishedCase('G08').given;
  const between = ([low, high]: [number, number], move: number): number =>
    low + ((high - low) * (1 + move)) / 2;
  const loop = (x: Float64Array): { k: number; dead: number } => ({
    k: between(gain_per_s, x[0]),
    dead: between(delay_s, x[1]),
  });

  it.each([
    ['least_phase_margin', ({ k, dead }: ReturnType<typeof loop>) => 90 - (180 / Math.PI) * k * dead],
    ['least_gain_margin', ({ k, dead }: ReturnType<typeof loop>) => Math.PI / (2 * k * dead)],
    ['least_delay_margin', ({ k, dead }: ReturnType<typeof loop>) => Math.PI / (2 * k) - dead],
  ])('G08: %s', async (figure, margin) => {
    const { worst } = await worstOf({ size: 2, headroom: (x) => margin(loop(x)) }, 3);
    expectPublished('G08', figure, worst!.rank);
  });
});

describe('how the search goes about it', () => {
  const quiet: Box = { title: '', size: 3, headroom: (x) => 1 + x[0] - x[1] * x[2], worst: -1 };

  it('is the same every time for the same seed', async () => {
    const [a, b] = [await worstOf(quiet, 5), await worstOf(quiet, 5)];
    expect(a.worst).toEqual(b.worst);
    expect(a.used).toBe(b.used);
  });

  it('never leaves the box and never overruns the budget', async () => {
    let evaluated = 0;
    const within = (x: Float64Array): number => {
      evaluated++;
      expect(Math.max(...x.map(Math.abs))).toBeLessThanOrEqual(1);
      return quiet.headroom(x);
    };
    const trials = await worstOf({ size: 3, headroom: within }, 6);
    expect(evaluated).toBeLessThanOrEqual(budget);
    expect(trials.used).toBeLessThanOrEqual(budget);
  });

  it('goes round plants that are kept out or have no finite headroom', async () => {
    // Infinite on half of the box, as a gain margin without a crossing is.
    const headroom = (x: Float64Array): number =>
      x[0] + x[1] > 0.2 ? Number.POSITIVE_INFINITY : (x[0] - 0.5) ** 2 + (x[1] + 0.6) ** 2 - 0.01;
    const { worst } = await worstOf({ size: 2, headroom }, 7);
    expect(worst!.rank).toBeCloseTo(-0.01, 4);
  });

  it('has nothing to do where nothing is uncertain', async () => {
    const trials = new Trials(async () => [], 100);
    await findWorst([{ move: new Float64Array(0), rank: 1 }], { least: [], most: [] }, trials, 1);
    expect(trials.used).toBe(0);
  });
});
