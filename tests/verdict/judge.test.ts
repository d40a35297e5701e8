import fc from 'fast-check';
import { describe, expect, it } from 'vitest';
import type { MeasureResult } from '../../src/measure/measure.js';
import { judge } from '../../src/verdict/judge.js';
import { requirementOf } from './judgements.js';

const value = (number: number): MeasureResult => ({ kind: 'value', value: number });
const finite = fc.double({ min: -1e6, max: 1e6, noNaN: true });

describe('judging one result', () => {
  it('takes a value equal to the limit as met', () => {
    for (const limit of [{ at_most: 10 }, { at_least: 10 }, { between: [10, 12] as [number, number] }]) {
      const judgement = judge(requirementOf({ limit }), value(10));
      expect(judgement.kind).toBe('met');
      expect(judgement).toHaveProperty('headroom', 0);
    }
  });

  it('counts headroom as a share of the limit, negative when broken', () => {
    expect(judge(requirementOf({ limit: { at_most: 10 } }), value(7))).toHaveProperty('headroom', 0.3);
    expect(judge(requirementOf({ limit: { at_most: 10 } }), value(15))).toMatchObject({
      kind: 'broken',
      headroom: -0.5,
    });
    expect(judge(requirementOf({ limit: { at_least: -4 } }), value(-2))).toHaveProperty('headroom', 0.5);
  });

  it('counts the nearer end of `between` over half the width', () => {
    const requirement = requirementOf({ limit: { between: [2, 6] } });
    expect(judge(requirement, value(4))).toHaveProperty('headroom', 1);
    expect(judge(requirement, value(5))).toHaveProperty('headroom', 0.5);
    expect(judge(requirement, value(1))).toHaveProperty('headroom', -0.5);
  });

  it('takes `scale` where the limit is zero', () => {
    const requirement = requirementOf({ limit: { at_most: 0 }, scale: 4 });
    expect(judge(requirement, value(1))).toMatchObject({ kind: 'broken', headroom: -0.25 });
  });

  it('caps headroom at the whole limit, but not what orders the plants', () => {
    const judgement = judge(requirementOf({ limit: { at_least: 1 } }), value(Number.POSITIVE_INFINITY));
    expect(judgement).toMatchObject({ kind: 'met', headroom: 1, rank: Number.POSITIVE_INFINITY });
  });

  it('orders results: what cannot be formed is worst, then overflow, then never, then the values', () => {
    const requirement = requirementOf();
    const results: MeasureResult[] = [
      { kind: 'unformed', why: 'w' },
      { kind: 'overflow', why: 'w', time: 0.1 },
      { kind: 'overflow', why: 'w', time: 3 },
      { kind: 'never', why: 'w', left: Number.POSITIVE_INFINITY },
      { kind: 'never', why: 'w', left: 0.2 },
      value(1e52),
      value(1e6),
      value(10),
      value(0),
    ];
    const ranks = results.map((result) => judge(requirement, result).rank);
    expect(ranks).toEqual([...ranks].sort((a, b) => a - b));
    expect(new Set(ranks).size).toBe(ranks.length);
  });

  it('never lets a result without a number pass', () => {
    for (const kind of ['never', 'overflow', 'unformed'] as const) {
      const result = { kind, why: 'w', left: 0, time: 1 } as MeasureResult;
      expect(judge(requirementOf(), result).kind).not.toBe('met');
    }
  });

  it('breaks exactly when the value is past the limit', () => {
    fc.assert(
      fc.property(finite, finite, (limit, measured) => {
        const judgement = judge(requirementOf({ limit: { at_most: limit } }), value(measured));
        expect(judgement.kind).toBe(measured <= limit ? 'met' : 'broken');
      }),
      { seed: 5 },
    );
  });

  it('ranks a worse value lower', () => {
    fc.assert(
      fc.property(finite, finite, (a, b) => {
        const rank = (measured: number): number => judge(requirementOf(), value(measured)).rank;
        if (a < b) expect(rank(a)).toBeGreaterThanOrEqual(rank(b));
      }),
      { seed: 6 },
    );
  });
});
