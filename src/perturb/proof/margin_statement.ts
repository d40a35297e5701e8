import { allRootsLeft, type ComplexPolynomial } from './half_plane.js';
import { down, type Interval, size, up } from './interval.js';
import { onHalfPlane, type SlopePolynomial } from './loop_polynomials.js';
import type { Slope, SlopeField } from './slope.js';
import { trigonometric } from './slope_evaluation.js';

/** What is to be proved of a loop transfer L = numerator/denominator, in δ = z − 1. Limits are ratios and rad. */
export type LoopClaim =
  | { kind: 'stable' }
  | { kind: 'gain_margin' | 'phase_margin' | 'modulus_margin'; atLeast: number };

/** Denominator and numerator of a loop transfer. */
export interface LoopPolynomials {
  denominator: SlopePolynomial;
  numerator: SlopePolynomial;
}

/**
 * The variable that a claim adds to the parameters, so that it becomes one about stability alone: the factor of the gain; the
 * angle by which L is turned; the angle of a disturbance of size `atLeast` that is added to 1 + L.
 */
export function ownVariable(claim: LoopClaim): Interval | undefined {
  switch (claim.kind) {
    case 'stable':
      return undefined;
    case 'gain_margin':
      return [down(1 / claim.atLeast), claim.atLeast];
    case 'phase_margin':
      return [0, claim.atLeast];
    case 'modulus_margin':
      return [0, up(Math.PI)];
  }
}

/** Whether a claim is proved over a box. The claim's own variable, if it has one, is the last of the box. */
export function claimHolds(field: SlopeField, polynomials: LoopPolynomials, claim: LoopClaim): boolean {
  const own = field.box.length - 1;
  if (claim.kind === 'modulus_margin' && !startsOutside(field, polynomials, claim.atLeast)) return false;
  const inDelta = family(field, polynomials, claim, own);
  return allRootsLeft(field, {
    real: onHalfPlane(field, inDelta.real),
    imaginary: onHalfPlane(field, inDelta.imaginary),
  });
}

/** The polynomials whose roots must all be stable, one for each value of the claim's own variable. */
function family(
  field: SlopeField,
  { denominator, numerator }: LoopPolynomials,
  claim: LoopClaim,
  own: number,
): ComplexPolynomial {
  const zero = numerator.map(() => field.constant(0));
  const times = (factor: Slope, polynomial: SlopePolynomial): Slope[] =>
    polynomial.map((entry) => field.multiply(factor, entry));
  const plus = (a: Slope[], b: Slope[]): Slope[] => a.map((entry, k) => field.add(entry, b[k]));
  switch (claim.kind) {
    case 'stable':
      return { real: plus(denominator, numerator), imaginary: zero };
    case 'gain_margin':
      return { real: plus(denominator, times(field.variable(own), numerator)), imaginary: zero };
    case 'phase_margin': {
      const { cosine, sine } = turn(field, own);
      return {
        real: plus(denominator, times(cosine, numerator)),
        imaginary: times(field.negate(sine), numerator),
      };
    }
    case 'modulus_margin': {
      const { cosine, sine } = turn(field, own);
      const length = field.constant(claim.atLeast);
      const disturbed = field.add(field.constant(1), field.multiply(length, cosine));
      return {
        real: plus(times(disturbed, denominator), numerator),
        imaginary: times(field.multiply(length, sine), denominator),
      };
    }
  }
}

function turn(field: SlopeField, own: number): { cosine: Slope; sine: Slope } {
  const angle = field.variable(own);
  const [sine, cosine] = [trigonometric(Math.sin), trigonometric(Math.cos)];
  const minusSine = (x: Interval): Interval => {
    const [low, high] = sine(x);
    return [-high, -low];
  };
  return { cosine: field.apply(angle, cosine, minusSine), sine: field.apply(angle, sine, cosine) };
}

/** |1 + L| > modulus at frequency zero; with no crossing at any angle it then stays outside at all frequencies. */
function startsOutside(
  field: SlopeField,
  { denominator, numerator }: LoopPolynomials,
  modulus: number,
): boolean {
  const closed = field.add(denominator[0], numerator[0]);
  const below = size(denominator[0].range) * modulus;
  const [low, high] = closed.range;
  return (low > 0 || high < 0) && Math.min(Math.abs(low), Math.abs(high)) > up(below);
}

/** The variable that moves the polynomials most across the box, for where to cut it. */
export function mostMoving(
  box: readonly Interval[],
  loops: readonly LoopPolynomials[],
  claim: LoopClaim,
): number {
  const own = ownVariable(claim);
  const moves = box.map(([low, high], i) => {
    const width = high - low;
    if (own && i === box.length - 1) return claim.kind === 'gain_margin' ? (2 * width) / (low + high) : width;
    return Math.max(
      ...loops.flatMap(({ denominator, numerator }) =>
        denominator.map((entry, k) => relativeMove([entry, numerator[k]], i, width)),
      ),
    );
  });
  return moves.reduce((best, move, i) => (move > moves[best] ? i : best), 0);
}

/** Against the coefficients of one power together: one of them alone may be zero, as of an integrator. */
function relativeMove(of: readonly Slope[], index: number, width: number): number {
  const total = (sizeOf: (entry: Slope) => number): number =>
    of.reduce((sum, entry) => sum + sizeOf(entry), 0);
  const move = total(({ slopes }) => size(slopes[index])) * width;
  return move === 0 ? 0 : move / total(({ centre }) => size(centre));
}
