import fc from 'fast-check';
import { describe, expect, it } from 'vitest';
import { normalQuantile, normalShareBelow } from '../../src/perturb/normal_distribution.js';
import reference from './scipy_values.json' with { type: 'json' };

// Outside source: scipy.stats.norm (scipy 1.10.1), values in scipy_values.json.
describe('the normal distribution', () => {
  it.each(reference.normal_quantiles)('quantile of %f is %f', (share, x) => {
    expect(Math.abs(normalQuantile(share) - x)).toBeLessThanOrEqual(1e-14 * Math.max(1, Math.abs(x)));
  });

  it.each(reference.normal_shares)('share below %f is %f', (x, share) => {
    expect(Math.abs(normalShareBelow(x) - share)).toBeLessThanOrEqual(2e-16 + 1e-14 * share);
  });

  it('quantile and share undo each other', () => {
    fc.assert(
      fc.property(fc.double({ min: 1e-6, max: 1 - 1e-6, noNaN: true }), (share) => {
        expect(normalShareBelow(normalQuantile(share))).toBeCloseTo(share, 13);
      }),
      { seed: 11 },
    );
  });

  it('the quantile is odd about a half', () => {
    fc.assert(
      fc.property(fc.integer({ min: 1, max: 2 ** 20 - 1 }), (k) => {
        const share = k / 2 ** 20;
        expect(normalQuantile(1 - share)).toBeCloseTo(-normalQuantile(share), 13);
      }),
      { seed: 12 },
    );
  });
});
