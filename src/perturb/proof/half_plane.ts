import { product, sum } from './interval.js';
import { isNothing, type Slope, SlopeField } from './slope.js';

/** A polynomial with complex coefficients over a box, ascending powers. */
export interface ComplexPolynomial {
  real: Slope[];
  imaginary: Slope[];
}

/**
 * Whether all roots lie left of the imaginary axis, for every polynomial of the box at once.
 * @returns false where it is not so, or the bounds are too wide to tell.
 */
export function allRootsLeft(field: SlopeField, polynomial: ComplexPolynomial): boolean {
  const balanced = inOwnUnits(field, polynomial);
  return leftByCorners(balanced) || leftByReduction(field, balanced);
}

/**
 * P of degree n has its roots left exactly when |P(−1)| < |P(1)| and [P*(−1)·P(s) − P(−1)·P*(s)]/(s + 1), of degree n − 1, has
 * them there, where P*(s) has the coefficients (−1)ᵏ·conj(pₖ) (Schur 1917, carried from the circle to the half plane). At the
 * end a constant other than zero must be left.
 */
function leftByReduction(field: SlopeField, polynomial: ComplexPolynomial): boolean {
  let current = scaledDown(field, polynomial);
  for (let degree = polynomial.real.length - 1; degree > 0; degree--) {
    const next = reduced(field, current);
    if (next === undefined) return false;
    current = scaledDown(field, next);
  }
  const [real] = current.real;
  const [imaginary] = current.imaginary;
  return square(real)[0] + square(imaginary)[0] > 0;
}

/**
 * A polynomial whose coefficients lie between bounds, real and imaginary parts each on their own, has its roots left for all
 * choices exactly when eight corner polynomials have them there (Kharitonov 1978): on the imaginary axis its values fill a
 * rectangle, and these give its four corners above and below zero.
 */
function leftByCorners({ real, imaginary }: ComplexPolynomial): boolean {
  const bounds = [...real, ...imaginary].flatMap(({ range }) => range);
  if (!bounds.every(Number.isFinite) || holdsZero(real, imaginary)) return false;
  const isReal = imaginary.every(isNothing);
  return [false, true].every((below) =>
    // A real polynomial has the conjugate values below.
    isReal && below
      ? true
      : [0, 1, 2, 3].every((corner) => {
          const point = new SlopeField([]);
          const at = (end: number, { range }: Slope): Slope => point.constant(range[end]);
          const ends = real.map((_, k) => endsAt(k, corner & 1, corner >> 1, below));
          return leftByReduction(point, {
            real: real.map((entry, k) => at(ends[k].real, entry)),
            imaginary: imaginary.map((entry, k) => at(ends[k].imaginary, entry)),
          });
        }),
  );
}

function holdsZero(real: readonly Slope[], imaginary: readonly Slope[]): boolean {
  return [real, imaginary].every((of) => {
    const [low, high] = of[of.length - 1].range;
    return low <= 0 && high >= 0;
  });
}

/**
 * Which bounds (0 lower, 1 upper) the parts of the coefficient of sᵏ take for one corner of the values at s = jω, ω above or
 * below zero: jᵏ turns the real part of p into the real part, the imaginary, their negatives, and so on.
 */
function endsAt(k: number, inReal: number, inImaginary: number, below: boolean) {
  const flip = below && k % 2 === 1;
  const of = (end: number, negative: boolean): number => (negative !== flip ? 1 - end : end);
  switch (k % 4) {
    case 0:
      return { real: of(inReal, false), imaginary: of(inImaginary, false) };
    case 1:
      return { real: of(inImaginary, false), imaginary: of(inReal, true) };
    case 2:
      return { real: of(inReal, true), imaginary: of(inImaginary, true) };
    default:
      return { real: of(inImaginary, true), imaginary: of(inReal, false) };
  }
}

/** With s measured in a power of two near the mean size of the roots, which changes nothing but the numbers' sizes. */
function inOwnUnits(field: SlopeField, { real, imaginary }: ComplexPolynomial): ComplexPolynomial {
  const n = real.length - 1;
  const sizeAt = (k: number): number => Math.hypot(middle(real[k]), middle(imaginary[k]));
  const mean = (sizeAt(0) / sizeAt(n)) ** (1 / Math.max(1, n));
  const unit = Number.isFinite(mean) && mean > 0 ? 2 ** Math.round(Math.log2(mean)) : 1;
  const scale = (entry: Slope, k: number): Slope => field.multiply(entry, field.constant(unit ** k));
  return { real: real.map(scale), imaginary: imaginary.map(scale) };
}

function middle({ centre: [low, high] }: Slope): number {
  return low + (high - low) / 2;
}

function reduced(field: SlopeField, p: ComplexPolynomial): ComplexPolynomial | undefined {
  const signs = p.real.map((_, k) => (k % 2 === 0 ? 1 : -1));
  const signed = (entry: Slope, k: number): Slope => (signs[k] < 0 ? field.negate(entry) : entry);
  const conjugate: ComplexPolynomial = {
    real: p.real.map(signed),
    imaginary: p.imaginary.map((entry, k) => signed(field.negate(entry), k)),
  };
  const total = (entries: readonly Slope[]): Slope =>
    entries.reduce((sumSoFar, entry) => field.add(sumSoFar, entry));
  // P(−1), and P*(−1), which is the conjugate of P(1).
  const behind = { real: total(p.real.map(signed)), imaginary: total(p.imaginary.map(signed)) };
  const ahead = { real: total(p.real), imaginary: field.negate(total(p.imaginary)) };
  const excess = field.subtract(squaredSize(field, ahead), squaredSize(field, behind));
  if (!(excess.range[0] > 0)) return undefined;
  const difference = {
    real: p.real.map((_, k) =>
      field.subtract(realOf(field, ahead, p, k), realOf(field, behind, conjugate, k)),
    ),
    imaginary: p.real.map((_, k) =>
      field.subtract(imaginaryOf(field, ahead, p, k), imaginaryOf(field, behind, conjugate, k)),
    ),
  };
  return { real: divided(field, difference.real), imaginary: divided(field, difference.imaginary) };
}

interface ComplexSlope {
  real: Slope;
  imaginary: Slope;
}

function realOf(field: SlopeField, a: ComplexSlope, p: ComplexPolynomial, k: number): Slope {
  return field.subtract(field.multiply(a.real, p.real[k]), field.multiply(a.imaginary, p.imaginary[k]));
}

function imaginaryOf(field: SlopeField, a: ComplexSlope, p: ComplexPolynomial, k: number): Slope {
  return field.add(field.multiply(a.real, p.imaginary[k]), field.multiply(a.imaginary, p.real[k]));
}

function squaredSize(field: SlopeField, { real, imaginary }: ComplexSlope): Slope {
  return field.add(field.multiply(real, real), field.multiply(imaginary, imaginary));
}

/** The quotient by s + 1, from the highest power down; that nothing is left over follows from the making. */
function divided(field: SlopeField, ascending: Slope[]): Slope[] {
  const quotient = new Array<Slope>(ascending.length - 1);
  let carry = field.constant(0);
  for (let k = ascending.length - 1; k > 0; k--) {
    carry = field.subtract(ascending[k], carry);
    quotient[k - 1] = carry;
  }
  return quotient;
}

function square({ range }: Slope): readonly [number, number] {
  const [low, high] = range;
  if (low <= 0 && high >= 0) return sum([0, 0], [0, product(range, range)[1]]);
  return product(range, range);
}

/** By a power of two, so that products stay in range and nothing is rounded. */
function scaledDown(field: SlopeField, { real, imaginary }: ComplexPolynomial): ComplexPolynomial {
  const largest = Math.max(
    ...[...real, ...imaginary].map(({ centre }) => Math.max(Math.abs(centre[0]), Math.abs(centre[1]))),
  );
  if (!(largest > 0) || !Number.isFinite(largest)) return { real, imaginary };
  const factor = field.constant(2 ** -Math.round(Math.log2(largest)));
  const scale = (entry: Slope): Slope => field.multiply(entry, factor);
  return { real: real.map(scale), imaginary: imaginary.map(scale) };
}
