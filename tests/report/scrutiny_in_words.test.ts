import { describe, expect, it } from 'vitest';
import {
  effectsInWords,
  effortInWords,
  proofInWords,
  reachInWords,
  reachShort,
  scrutinyLines,
  shrunkInWords,
} from '../../src/report/scrutiny_in_words.js';
import { plant, requirement, value } from './sample_run.js';

describe('what scrutiny found, in words', () => {
  it('the counterexample nearest to nominal', () => {
    const words = shrunkInWords({ shrunk: plant(value(0.26), -0.04, true) });
    expect(words).toBe(
      'breaks with friction at its lower bound (10 N*m*s/rad), drive 63 % of the way to its upper bound (191.3 N*m); nothing else moved',
    );
    expect(shrunkInWords({})).toBeUndefined();
  });

  it.each([
    [{ factor: 1.3818, found: true }, '1.38-fold', 'the bounds may grow 1.38-fold before a break is found'],
    [{ factor: 0.2, found: true }, '0.2-fold', 'the bounds must shrink to 0.2-fold before no break is found'],
    [{ factor: 3, found: false }, 'beyond 3-fold', 'no break was found with the bounds grown 3-fold'],
    [{ factor: 0, found: true }, '0-fold', 'the nominal plant breaks'],
  ])('the reach %o', (reach, short, long) => {
    expect(reachShort({ reach })).toBe(short);
    expect(reachInWords({ reach })).toBe(long);
  });

  it('what matters most, in points of headroom; what has no effect is not named', () => {
    const effects = [
      { name: 'friction', headroom: 0.518, spread: 0.1 },
      { name: 'lag\n', headroom: 0.145, spread: 0 },
      { name: 'stiction', headroom: 0, spread: 0 },
    ];
    expect(effectsInWords({ effects })).toMatch(/^friction 51.8, lag\S* 14.5$/);
    expect(effectsInWords({ effects }, 1)).toBe('friction 51.8');
    expect(effectsInWords({ effects: effects.slice(2) })).toBeUndefined();
  });

  it('a proof, and how much of it is open', () => {
    expect(proofInWords({ proof: { kind: 'proved', boxes: 1 } })).toBe(
      'proved for every plant within the bounds (1 box)',
    );
    expect(
      proofInWords({ proof: { kind: 'open', boxes: 1200, openShare: 0.031, why: 'the budget ended' } }),
    ).toBe('open on 3.1 % of the bounds (1,200 boxes): the budget ended');
    expect(proofInWords({ proof: { kind: 'refuted', boxes: 3 } })).toContain('refuted');
    expect(proofInWords({})).toBeUndefined();
  });

  it('a proof that was not tried, once for all requirements of which it is said', () => {
    const proof = { kind: 'open', boxes: 0, openShare: 1, why: 'too many parameters' } as const;
    const [a, b] = [requirement({ name: 'A', proof }), requirement({ name: 'B', proof })];
    expect(scrutinyLines({ requirements: [a, b] })).toEqual([
      'proof: A and B not tried: too many parameters',
    ]);
  });

  it('how many runs were used', () => {
    expect(effortInWords({ effort: { searched: 1400, shrinking: 0, reach: 318 } })).toBe(
      'search 1,400, reach 318 runs of one requirement',
    );
    expect(effortInWords({ effort: { searched: 0, shrinking: 0, reach: 0 } })).toBeUndefined();
  });

  it('one line a spec, and none where nothing is known', () => {
    const one = requirement({ reach: { factor: 1.3, found: true } });
    expect(scrutinyLines({ requirements: [one, requirement()] })).toEqual([
      `reach of the bounds: ${one.name} 1.3-fold`,
    ]);
    expect(scrutinyLines({ requirements: [requirement()] })).toEqual([]);
  });
});
