import { type ProofResult, proveOn } from './branch_and_bound.js';
import type { Interval } from './interval.js';
import {
  claimHolds,
  type LoopClaim,
  type LoopPolynomials,
  mostMoving,
  ownVariable,
} from './margin_statement.js';
import { SlopeField } from './slope.js';

/** A family of loop transfers over a box of parameters. */
export interface PolynomialFamily {
  readonly box: readonly Interval[];
  /** Together they hold the loop transfers of all plants of a box; on too wide a box, along which variable to halve it. */
  polynomials(field: SlopeField): LoopPolynomials[] | { cut: number };
}

const mostKept = 64;

/**
 * Proves that a claim holds for every loop of a family, or finds one for which it is false.
 * @param failsAt whether the claim is false for one choice of the parameters.
 * @throws {Unprovable} where intervals are not carried through the loop.
 */
export function proveClaim(
  family: PolynomialFamily,
  claim: LoopClaim,
  failsAt: (parameters: readonly number[]) => boolean,
  budget: number,
): ProofResult {
  const own = ownVariable(claim);
  const parameters = family.box.length;
  const kept = new Map<string, LoopPolynomials[] | { cut: number }>();
  const polynomialsOn = (field: SlopeField): LoopPolynomials[] | { cut: number } => {
    // A cut of the claim's own variable leaves the loop as it is.
    const key = field.box.slice(0, parameters).join();
    let found = kept.get(key);
    if (!found) {
      found = family.polynomials(field);
      if (kept.size >= mostKept) kept.delete(kept.keys().next().value!);
      kept.set(key, found);
    }
    return found;
  };
  return proveOn(
    own ? [...family.box, own] : family.box,
    {
      holdsOn: (box) => {
        const field = new SlopeField(box);
        const loops = polynomialsOn(field);
        return !('cut' in loops) && loops.every((loop) => claimHolds(field, loop, claim));
      },
      work: (box) => {
        const loops = polynomialsOn(new SlopeField(box));
        return 'cut' in loops ? 1 : loops.length;
      },
      failsAt: (point) => failsAt(point.slice(0, parameters)),
      cut: (box) => {
        const loops = polynomialsOn(new SlopeField(box));
        return 'cut' in loops ? loops.cut : mostMoving(box, loops, claim);
      },
    },
    budget,
  );
}

/** Whether bounds are narrow enough for a proof at all: one plant alone is proved stable. */
export function provenStableAt(family: PolynomialFamily, parameters: readonly number[]): boolean {
  const field = new SlopeField(parameters.map((value): Interval => [value, value]));
  const loops = family.polynomials(field);
  return !('cut' in loops) && loops.every((loop) => claimHolds(field, loop, { kind: 'stable' }));
}

/** Products of quantities that one look at the loop takes, on which the cost of a box depends. */
export function workAt(family: PolynomialFamily, parameters: readonly number[]): number {
  const field = new SlopeField(parameters.map((value): Interval => [value, value]));
  const loops = family.polynomials(field);
  if (!('cut' in loops)) for (const loop of loops) claimHolds(field, loop, { kind: 'stable' });
  return field.products;
}
