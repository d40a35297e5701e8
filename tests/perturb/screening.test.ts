import fc from 'fast-check';
import { describe, expect, it } from 'vitest';
import { effectsOf, screeningWalks } from '../../src/perturb/screening.js';

const box = (size: number) => ({
  least: new Array<number>(size).fill(-1),
  most: new Array<number>(size).fill(1),
});

function effects(size: number, of: (x: Float64Array) => number, walks = 40) {
  const moves = screeningWalks(box(size), walks, 3);
  return effectsOf(moves, moves.map(of), size);
}

describe('which parameters matter', () => {
  it('walks change one parameter at a time by two thirds of its range, each once', () => {
    fc.assert(
      fc.property(fc.integer({ min: 1, max: 12 }), fc.integer({ min: 0, max: 1000 }), (size, seed) => {
        const moves = screeningWalks(box(size), 2, seed);
        expect(moves).toHaveLength(2 * (size + 1));
        for (const start of [0, size + 1]) {
          const changed = new Set<number>();
          for (let at = start; at < start + size; at++) {
            const k = moves[at].findIndex((x, i) => x !== moves[at + 1][i]);
            expect(Math.abs(moves[at + 1][k] - moves[at][k])).toBeCloseTo(4 / 3, 12);
            changed.add(k);
          }
          expect(changed.size).toBe(size);
        }
        for (const x of moves.flatMap((move) => [...move])) {
          expect(Math.abs(x)).toBeLessThanOrEqual(1 + 1e-12);
        }
      }),
      { seed: 61, numRuns: 30 },
    );
  });

  // Of a sum of straight lines the effect over the whole range is the slope times two, whatever the walk.
  it('gives the exact effects of a linear score, in order', () => {
    const found = effects(4, (x) => 3 * x[0] - 5 * x[2] + 0.1 * x[3]);
    expect(found.map(({ parameter }) => parameter)).toEqual([2, 0, 3, 1]);
    [10, 6, 0.2, 0].forEach((size, i) => {
      expect(found[i].size).toBeCloseTo(size, 9);
      expect(found[i].spread).toBeCloseTo(0, 9);
    });
  });

  // For x0·x1 on levels ±1, ±1/3 the size of the effect of either is 2·mean|level| = 4/3, its mean 0.
  it('sees an interaction that has no mean effect', () => {
    const [first, second, third] = effects(3, (x) => x[0] * x[1], 400);
    for (const one of [first, second]) {
      expect(Math.abs(one.size - 4 / 3)).toBeLessThan(0.12);
      expect(one.spread).toBeGreaterThan(1);
    }
    expect(third).toEqual({ parameter: 2, size: 0, spread: 0 });
  });

  it('leaves out steps without a finite score', () => {
    const found = effects(2, (x) => (x[1] > 0 ? Number.POSITIVE_INFINITY : x[0]));
    expect(found[0].parameter).toBe(0);
    expect(found[0].size).toBeCloseTo(2, 9);
    expect(Number.isFinite(found[1].size)).toBe(true);
  });

  it('is the same for the same seed', () => {
    expect(screeningWalks(box(5), 3, 9)).toEqual(screeningWalks(box(5), 3, 9));
    expect(screeningWalks(box(5), 3, 9)).not.toEqual(screeningWalks(box(5), 3, 10));
  });
});
