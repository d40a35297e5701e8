import { describe, expect, it } from 'vitest';
import { Trials } from '../../src/perturb/trials.js';

describe('scoring within a budget', () => {
  const counted = (budget: number) => {
    const seen: number[][] = [];
    const trials = new Trials(async (moves) => {
      seen.push(...moves.map((move) => [...move]));
      return moves.map((move) => move[0]);
    }, budget);
    return { trials, seen };
  };
  const moves = (...values: number[]): Float64Array[] => values.map((value) => Float64Array.of(value));

  it('scores each move once', async () => {
    const { trials, seen } = counted(10);
    expect(await trials.ranks(moves(3, 1, 3))).toEqual([3, 1, 3]);
    expect(await trials.ranks(moves(1, 2))).toEqual([1, 2]);
    expect(seen).toEqual([[3], [1], [2]]);
    expect(trials.used).toBe(3);
  });

  it('ranks what is beyond the budget as infinitely good, without scoring it', async () => {
    const { trials, seen } = counted(2);
    expect(await trials.ranks(moves(5, 4, -9))).toEqual([5, 4, Number.POSITIVE_INFINITY]);
    expect(seen).toHaveLength(2);
    expect(trials.spent).toBe(true);
    expect(await trials.rank(Float64Array.of(5))).toBe(5);
    expect(trials.worst).toEqual({ move: Float64Array.of(4), rank: 4 });
  });

  it('takes what was known before for free', async () => {
    const known = [{ move: Float64Array.of(7), rank: -2 }];
    const trials = new Trials(async (asked) => asked.map(() => 0), 5, known);
    expect(await trials.rank(Float64Array.of(7))).toBe(-2);
    expect(trials.used).toBe(0);
    expect(trials.worst?.rank).toBe(-2);
  });
});
