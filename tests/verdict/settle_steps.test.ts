import { describe, expect, it } from 'vitest';
import type { MeasureResult } from '../../src/measure/measure.js';
import { mostHalvings, settleSteps } from '../../src/verdict/settle_steps.js';
import { requirementOf } from './judgements.js';

const requirements = [requirementOf({ limit: { at_most: 10 } })];

/** A measure whose error quarters with every halving, as that of a method of second order. */
function ofSecondOrder(truth: number, error: number): (halvings: number) => MeasureResult[] {
  return (halvings) => [{ kind: 'value', value: truth + error * 0.25 ** halvings }];
}

describe('halving the steps until the measures stand', () => {
  it('stops at once where nothing changes', () => {
    expect(settleSteps(requirements, ofSecondOrder(3, 0), 0)).toEqual({
      results: [{ kind: 'value', value: 3 }],
      halvings: 0,
    });
  });

  it('halves until the change is below a ten-thousandth of the limit', () => {
    const { results, halvings } = settleSteps(requirements, ofSecondOrder(3, 0.1), 0);
    const next = 0.1 * 0.25 ** halvings * 0.75;
    expect(next).toBeLessThan(1e-3);
    expect(next * 4).toBeGreaterThanOrEqual(1e-3);
    expect(results[0]).toHaveProperty('value', 3 + 0.1 * 0.25 ** halvings);
  });

  it('starts at the halvings it is given', () => {
    expect(settleSteps(requirements, ofSecondOrder(3, 0), 5).halvings).toBe(5);
  });

  it('cannot judge what still changes at the finest steps', () => {
    const restless = (halvings: number): MeasureResult[] => [{ kind: 'value', value: halvings % 2 }];
    const { results, halvings } = settleSteps(requirements, restless, 0);
    expect(halvings).toBe(mostHalvings);
    expect(results[0]).toMatchObject({ kind: 'unformed', why: expect.stringContaining('8 halvings') });
  });

  it('does not take a change of kind for a small change', () => {
    const evaluate = (halvings: number): MeasureResult[] =>
      halvings === 0 ? [{ kind: 'never', why: 'w', left: 0 }] : [{ kind: 'value', value: 1 }];
    expect(settleSteps(requirements, evaluate, 0)).toMatchObject({
      results: [{ kind: 'value', value: 1 }],
      halvings: 1,
    });
  });

  it('measures the change against `scale` and half the width of `between`', () => {
    const step = (halvings: number): MeasureResult[] => [{ kind: 'value', value: halvings === 0 ? 0.5 : 0 }];
    const wide = [requirementOf({ limit: { between: [0, 20_000] } })];
    expect(settleSteps(wide, step, 0).halvings).toBe(0);
    const scaled = [requirementOf({ limit: { at_most: 0 }, scale: 10_000 })];
    expect(settleSteps(scaled, step, 0).halvings).toBe(0);
    expect(settleSteps(requirements, step, 0).halvings).toBe(1);
  });
});
