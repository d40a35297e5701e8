import fc from 'fast-check';
import { describe, expect, it } from 'vitest';
import { shrinkCounts } from '../../src/perturb/shrink_counts.js';
import { type Ranked, Trials } from '../../src/perturb/trials.js';

/** Counts are moves here; they break where the answer is yes. */
async function least(most: number[], breaks: (counts: number[]) => boolean, budget = 1000) {
  const asked: number[][] = [];
  const trials = new Trials(async (moves) => {
    asked.push(...moves.map((move) => [...move]));
    return moves.map((move) => (breaks([...move]) ? -1 : 1));
  }, budget);
  const start: Ranked = { move: Float64Array.from(most), rank: -1 };
  const found = await shrinkCounts(start, most, (counts) => Float64Array.from(counts), trials);
  return { counts: [...found.move], asked };
}

describe('bringing counts down by fast-check', () => {
  it('puts to 0 what it can, and the others to where one less does not break', async () => {
    const { counts } = await least([1000, 1000, 1000], ([a, , c]) => a >= 631 && c >= 17);
    expect(counts).toEqual([631, 0, 17]);
  });

  it('takes about log₂ of the steps for one count', async () => {
    const { asked } = await least([1024], ([a]) => a >= 317);
    expect(asked.length).toBeLessThanOrEqual(14);
  });

  it('leaves nothing that could be 0, or one less, by itself: whatever the question', () => {
    const table = fc.func(fc.boolean());
    return fc.assert(
      fc.asyncProperty(table, fc.array(fc.nat(20), { minLength: 1, maxLength: 4 }), async (answer, most) => {
        const breaks = (counts: number[]): boolean => counts.join() === most.join() || answer(...counts);
        const { counts } = await least(most, breaks);
        expect(breaks(counts)).toBe(true);
        counts.forEach((count, i) => {
          expect(count).toBeLessThanOrEqual(most[i]);
          if (count > 0) expect(breaks(counts.with(i, count - 1))).toBe(false);
        });
      }),
      { numRuns: 200 },
    );
  });

  it('never asks about the start, and stays there without a budget', async () => {
    const { counts, asked } = await least([7, 9], () => true, 0);
    expect(counts).toEqual([7, 9]);
    expect(asked).toEqual([]);
  });

  it('hands on what the trials throw, and asks no further', async () => {
    let asked = 0;
    const trials = new Trials(async () => {
      asked++;
      throw new Error('interrupted');
    }, 100);
    const start = { move: Float64Array.of(50), rank: -1 };
    const shrinking = shrinkCounts(start, [50], ([count]) => Float64Array.of(count), trials);
    await expect(shrinking).rejects.toThrow('interrupted');
    expect(asked).toBe(1);
  });
});
