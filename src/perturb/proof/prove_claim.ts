import { type ProofResult, proveOn } from './branch_and_bound.js';
import type { Interval } from './interval.js';
import {
  claimHolds,
  type LoopClaim,
  type LoopPolynomials,
  mostMoving,
  ownVariable,
} from './margin_statement.js';
import { isNothing, SlopeField } from './slope.js';

/** A family of loop transfers over a box of parameters. */
export interface PolynomialFamily {
  readonly box: readonly Interval[];
  polynomials(field: SlopeField): LoopPolynomials;
}

/** More variables than this that move the loop are not worth the try: the boxes needed grow with their power. */
export const mostVariables = 3;
const mostKept = 64;

/**
 * Proves that a claim holds for every loop of a family, or finds one for which it is false.
 * @param failsAt whether the claim is false for one choice of the parameters.
 * @throws {Unprovable} where intervals are not carried through the loop, or too many parameters move it.
 */
export function proveClaim(
  family: PolynomialFamily,
  claim: LoopClaim,
  failsAt: (parameters: readonly number[]) => boolean,
  mostBoxes: number,
): ProofResult {
  const own = ownVariable(claim);
  const parameters = family.box.length;
  const kept = new Map<string, LoopPolynomials>();
  const polynomialsOn = (field: SlopeField): LoopPolynomials => {
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
        return claimHolds(field, polynomialsOn(field), claim);
      },
      failsAt: (point) => failsAt(point.slice(0, parameters)),
      cut: (box) => mostMoving(box, polynomialsOn(new SlopeField(box)), claim),
    },
    mostBoxes,
  );
}

/** Whether bounds are narrow enough for a proof at all: one plant alone is proved stable. */
export function provenStableAt(family: PolynomialFamily, parameters: readonly number[]): boolean {
  const field = new SlopeField(parameters.map((value): Interval => [value, value]));
  return claimHolds(field, family.polynomials(field), { kind: 'stable' });
}

/** Number of states of the loop, on which the cost of a box depends. */
export function statesOf(family: PolynomialFamily): number {
  return family.polynomials(new SlopeField(family.box)).denominator.length - 1;
}

/** How many parameters of the box move the loop at all. */
export function movingParameters(family: PolynomialFamily): number {
  const { denominator, numerator } = family.polynomials(new SlopeField(family.box));
  const entries = [...denominator, ...numerator].filter((entry) => !isNothing(entry));
  return family.box.filter((_, i) => entries.some(({ slopes }) => slopes[i][0] !== 0 || slopes[i][1] !== 0))
    .length;
}
