import fc from 'fast-check';
import { describe, expect, it } from 'vitest';
import { mostExactPlayers, shapleyShares } from '../../../src/verdict/latched/shapley.js';

// Protects the sharing-out of a loss: the axioms of Shapley, "A value for n-person games" (1953), and games with known values.

const seed = 11;
const count = (members: readonly boolean[]): number => members.filter(Boolean).length;

/** A game of random worths: one for each coalition, nothing for none. */
const game = fc.integer({ min: 1, max: 6 }).chain((players) =>
  fc.record({
    players: fc.constant(players),
    worths: fc.array(fc.double({ min: -1, max: 1, noNaN: true }), {
      minLength: 2 ** players,
      maxLength: 2 ** players,
    }),
  }),
);
const worthIn =
  (worths: readonly number[]) =>
  (members: readonly boolean[]): number[] => {
    const code = members.reduce((sum, isIn, at) => sum + (isIn ? 2 ** at : 0), 0);
    return [code === 0 ? 0 : worths[code]];
  };

describe('exact shares', () => {
  it('of the glove game are 1/6, 1/6 and 4/6: two own a left glove, one the right one', () => {
    // Worth 1 for a pair. The third player joins a pair of orders first in 2 of 6 and then adds nothing.
    const { shares, sampledOrders } = shapleyShares(
      3,
      ([left, other, right]) => [right && (left || other) ? 1 : 0],
      seed,
    );
    expect(shares.map(([share]) => share)).toEqual([
      expect.closeTo(1 / 6, 12),
      expect.closeTo(1 / 6, 12),
      expect.closeTo(4 / 6, 12),
    ]);
    expect(sampledOrders).toBeUndefined();
  });

  it('of a product of two changes are halves: 0.7 · 0.5 instead of 1 · 1', () => {
    // By hand: the first adds (0.7 - 1) alone and (0.35 - 0.5) after the other, the mean of both.
    const { shares } = shapleyShares(2, ([a, b]) => [(a ? 0.7 : 1) * (b ? 0.5 : 1)], seed);
    expect(shares[0][0]).toBeCloseTo((0.7 - 1 + (0.35 - 0.5)) / 2, 12);
    expect(shares[1][0]).toBeCloseTo((0.5 - 1 + (0.35 - 0.7)) / 2, 12);
  });

  it('add up to the worth of all', () => {
    fc.assert(
      fc.property(game, ({ players, worths }) => {
        const worth = worthIn(worths);
        const { shares } = shapleyShares(players, worth, seed);
        const sum = shares.reduce((total, [share]) => total + share, 0);
        expect(sum).toBeCloseTo(worth(new Array(players).fill(true))[0], 9);
      }),
    );
  });

  it('are nothing for one who adds nothing, and equal for those who add the same', () => {
    fc.assert(
      fc.property(game, ({ players, worths }) => {
        // Player 0 and a new last one are needed together with whatever the others do; player `players + 1` does nothing.
        const worth = (members: readonly boolean[]): number[] => {
          const both = members[0] && members[players] ? 1 : 0;
          return [both * worthIn(worths)(members.slice(1, players).concat(false))[0] + both];
        };
        const { shares } = shapleyShares(players + 2, worth, seed);
        expect(shares[players + 1][0]).toBeCloseTo(0, 12);
        expect(shares[0][0]).toBeCloseTo(shares[players][0], 9);
      }),
      { numRuns: 50 },
    );
  });

  it('of several games at once are those of each', () => {
    const both = shapleyShares(3, (members) => [count(members), count(members) ** 2], seed).shares;
    expect(both).toEqual([
      [expect.closeTo(1, 12), expect.closeTo(3, 12)],
      [expect.closeTo(1, 12), expect.closeTo(3, 12)],
      [expect.closeTo(1, 12), expect.closeTo(3, 12)],
    ]);
  });

  it('ask for each coalition once', () => {
    const asked = new Set<string>();
    shapleyShares(
      4,
      (members) => {
        const key = members.join();
        expect(asked).not.toContain(key);
        asked.add(key);
        return [0];
      },
      seed,
    );
    expect(asked.size).toBe(16);
  });
});

describe('sampled shares', () => {
  const players = mostExactPlayers + 2;

  it('are exact where nobody minds the order, and add up in any case', () => {
    const sum = shapleyShares(
      players,
      (members) => [members.reduce((all, isIn, at) => all + (isIn ? at : 0), 0)],
      seed,
    );
    sum.shares.forEach(([share], at) => {
      expect(share).toBeCloseTo(at, 12);
    });
    const square = shapleyShares(players, (members) => [count(members) ** 2], seed);
    expect(square.shares.reduce((total, [share]) => total + share, 0)).toBeCloseTo(players ** 2, 9);
    expect(square.sampledOrders).toBe(64);
  });

  it('are near the exact ones: every order and its reverse even the quadratic game out', () => {
    // A player who joins at place k adds 2k + 1; over an order and its reverse that is the number of players each.
    const { shares } = shapleyShares(players, (members) => [count(members) ** 2], seed);
    for (const [share] of shares) expect(share).toBeCloseTo(players, 9);
  });

  it('come out the same again from the same seed, and otherwise from another', () => {
    const worth = (members: readonly boolean[]): number[] => [count(members) ** 3 * (members[0] ? 1 : 2)];
    expect(shapleyShares(players, worth, 1)).toEqual(shapleyShares(players, worth, 1));
    expect(shapleyShares(players, worth, 1)).not.toEqual(shapleyShares(players, worth, 2));
  });
});
