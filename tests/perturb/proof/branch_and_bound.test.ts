import { describe, expect, it } from 'vitest';
import { type BoxStatement, proveOn } from '../../../src/perturb/proof/branch_and_bound.js';

/** x + y ≤ limit, by exact bounds of the box. */
const below = (limit: number): BoxStatement => ({
  holdsOn: ([x, y]) => x[1] + y[1] <= limit,
  failsAt: ([x, y]) => x + y > limit,
  cut: ([x, y]) => (x[1] - x[0] >= y[1] - y[0] ? 0 : 1),
});
const unit: [number, number][] = [
  [0, 1],
  [0, 1],
];

describe('branch and bound', () => {
  it('proves at once what holds on the whole box', () => {
    expect(proveOn(unit, below(2), 10)).toEqual({ kind: 'proved', boxes: 1 });
  });

  it('finds a point where the statement is false', () => {
    const result = proveOn(unit, below(1.9), 1000);
    expect(result.kind).toBe('refuted');
    if (result.kind === 'refuted') expect(result.at[0] + result.at[1]).toBeGreaterThan(1.9);
  });

  it('ends open with the share that is left when the budget is spent', () => {
    // Never false, but bounds that are a tenth too wide prove it only for boxes away from the far corner.
    const wide: BoxStatement = { ...below(2), holdsOn: ([x, y]) => x[1] + y[1] <= 1.9 };
    const result = proveOn(unit, wide, 200);
    if (result.kind !== 'open') throw new Error(result.kind);
    expect(result.boxes).toBeLessThanOrEqual(200);
    // The triangle x + y > 1.9 is 0.5 % of the box; boxes cover it from outside.
    expect(result.openShare).toBeGreaterThan(0.005);
    expect(result.openShare).toBeLessThan(0.05);
    const more = proveOn(unit, wide, 2000);
    expect(more.kind === 'open' && more.openShare < result.openShare).toBe(true);
  });

  it('gives up as soon as more boxes are left than it may look at', () => {
    const never: BoxStatement = { ...below(2), holdsOn: () => false };
    // After n looks without a success n + 1 boxes are left.
    expect(proveOn(unit, never, 101)).toEqual({ kind: 'open', boxes: 51, openShare: 1 });
  });

  it('counts a box for as much as it costs', () => {
    const dear: BoxStatement = { ...below(2), holdsOn: () => false, work: () => 9 };
    expect(proveOn(unit, dear, 101)).toEqual({ kind: 'open', boxes: 11, openShare: 1 });
  });

  it('looks at a box of no parameters once', () => {
    expect(proveOn([], { holdsOn: () => true, failsAt: () => false, cut: () => 0 }, 5).kind).toBe('proved');
  });
});
