import fc from 'fast-check';
import type { Ranked, Trials } from './trials.js';

/**
 * Brings counts, which stand for a move, down towards 0 by fast-check as long as it breaks: one after another, each to 0 where
 * it can be, else by bisection to where one less does not break.
 * @param start breaks; it is the move of the counts `most`.
 * @throws whatever the trials throw.
 */
export async function shrinkCounts(
  start: Ranked,
  most: readonly number[],
  moveAt: (counts: readonly number[]) => Float64Array,
  trials: Trials,
): Promise<Ranked> {
  let here = start;
  let thrown: { error: unknown } | undefined;
  const holds = async (counts: readonly number[]): Promise<boolean> => {
    if (thrown) return true;
    if (counts.every((count, i) => count === most[i])) return false;
    const move = moveAt(counts);
    try {
      const rank = await trials.rank(move);
      if (rank < 0) here = { move, rank };
      return !(rank < 0);
    } catch (error) {
      // Fast-check would take it for a break.
      thrown = { error };
      return true;
    }
  };
  const counts = fc.tuple(...most.map((max) => fc.integer({ min: 0, max })));
  await fc.check(fc.asyncProperty(counts, holds), {
    examples: [[[...most]]],
    numRuns: 1,
    seed: 0,
    markInterruptAsFailure: true,
  });
  if (thrown) throw thrown.error;
  return here;
}
