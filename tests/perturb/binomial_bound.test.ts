import fc from 'fast-check';
import { uniformFloat64 } from 'pure-rand/distribution/uniformFloat64';
import { xoroshiro128plus } from 'pure-rand/generator/xoroshiro128plus';
import { describe, expect, it } from 'vitest';
import { plantsNeeded, upperBoundOfShare } from '../../src/perturb/binomial_bound.js';

const counts = fc
  .tuple(fc.integer({ min: 1, max: 400 }), fc.double({ min: 0, max: 1, noNaN: true }))
  .map(([tried, share]) => ({ tried, broken: Math.floor(share * tried) }));
const confidence = fc.double({ min: 0.5, max: 0.999, noNaN: true });

describe('laws of the bound of a share', () => {
  it('lies above the share that was found, and at most at one', () => {
    fc.assert(
      fc.property(counts, confidence, ({ tried, broken }, sure) => {
        const bound = upperBoundOfShare(broken, tried, sure);
        expect(bound).toBeGreaterThan(broken / tried - 1e-12);
        expect(bound).toBeLessThanOrEqual(1);
      }),
      { seed: 1 },
    );
  });

  it('falls with every further plant that holds, and rises with one that breaks', () => {
    fc.assert(
      fc.property(counts, confidence, ({ tried, broken }, sure) => {
        const bound = upperBoundOfShare(broken, tried, sure);
        expect(upperBoundOfShare(broken, tried + 1, sure)).toBeLessThanOrEqual(bound);
        expect(upperBoundOfShare(broken + 1, tried + 1, sure)).toBeGreaterThanOrEqual(bound);
      }),
      { seed: 2 },
    );
  });

  it('rises with the confidence that is asked for', () => {
    fc.assert(
      fc.property(counts, confidence, ({ tried, broken }, sure) => {
        const more = sure + (1 - sure) / 2;
        expect(upperBoundOfShare(broken, tried, more)).toBeGreaterThanOrEqual(
          upperBoundOfShare(broken, tried, sure),
        );
      }),
      { seed: 3 },
    );
  });

  it('says nothing where nothing was tried or everything broke', () => {
    expect(upperBoundOfShare(0, 0, 0.95)).toBe(1);
    expect(upperBoundOfShare(7, 7, 0.95)).toBe(1);
  });

  it('needs exactly as many plants as first bring the bound under the share', () => {
    fc.assert(
      fc.property(fc.double({ min: 0.001, max: 0.5, noNaN: true }), confidence, (share, sure) => {
        const needed = plantsNeeded(share, sure);
        expect(upperBoundOfShare(0, needed, sure)).toBeLessThanOrEqual(share * (1 + 1e-9));
        if (needed > 1) expect(upperBoundOfShare(0, needed - 1, sure)).toBeGreaterThan(share);
      }),
      { seed: 4 },
    );
  });
});

// An exact bound covers at least as often as stated, whatever the true share (Clopper and Pearson 1934). In 2,000
// repetitions a coverage of 95 % is seen as at least 93.4 % but in one case of a thousand (3.1 standard deviations).
describe('the stated confidence holds in simulation', () => {
  it.each([
    [0.002, 300],
    [0.02, 100],
    [0.1, 60],
    [0.4, 30],
  ])('true share %f in %i plants, 2,000 repetitions', (share, tried) => {
    const generator = xoroshiro128plus(20 + tried);
    let covered = 0;
    for (let repetition = 0; repetition < 2000; repetition++) {
      let broken = 0;
      for (let plant = 0; plant < tried; plant++) if (uniformFloat64(generator) < share) broken++;
      if (upperBoundOfShare(broken, tried, 0.95) >= share) covered++;
    }
    expect(covered / 2000).toBeGreaterThanOrEqual(0.934);
  });
});
