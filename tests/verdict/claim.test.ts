import { describe, expect, it } from 'vitest';
import { claimOf } from '../../src/verdict/claim.js';
import { independent } from './judgements.js';

describe('what may be claimed, in words', () => {
  // 1 − 0.05^(1/1000) = 0.299 %: Hanley and Lippman-Hand 1983.
  it('quotes the bound after no failures', () => {
    expect(claimOf(independent(1000, 0), 0.95)).toBe(
      'in 1,000 independent plants none failed: with 95 % confidence fewer than 0.3 % do',
    );
  });

  it('never claims more than the bound: it rounds up', () => {
    // 1 − 0.05^(1/59) = 4.951 %
    expect(claimOf(independent(59, 0), 0.95)).toContain('fewer than 5 % do');
    // 1 − 0.01^(1/100) = 4.501 %
    expect(claimOf(independent(100, 0), 0.99)).toContain('with 99 % confidence fewer than 4.6 % do');
  });

  it('counts a plant that cannot be judged as failed', () => {
    expect(claimOf(independent(9, 0, 'w'), 0.95)).toMatch(/^1 of 10 independent plants failed/);
  });

  it('says no more than what was found where every plant failed', () => {
    expect(claimOf(independent(0, 4), 0.95)).toBe('4 of 4 independent plants failed');
  });

  it('claims nothing without independent plants', () => {
    expect(claimOf(independent(0, 0), 0.95)).toBeUndefined();
  });
});
