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
  if (leftByReduction(field, balanced)) return true;
  return balanced.imaginary.every(isNothing) && leftByCorners(balanced.real);
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

/** Which bound each coefficient takes in the four corner polynomials, from the lowest power on, repeating. */
const corners = ['llhh', 'hhll', 'lhhl', 'hllh'];

/**
 * A real polynomial whose coefficients lie between bounds, each on its own, has its roots left for all choices exactly when
 * four corner polynomials have them there (Kharitonov 1978).
 */
function leftByCorners(ascending: readonly Slope[]): boolean {
  const [low, high] = ascending[ascending.length - 1].range;
  if (!(low > 0 || high < 0)) return false;
  const point = new SlopeField([]);
  return corners.every((corner) => {
    const real = ascending.map(({ range }, k) => point.constant(range[corner[k % 4] === 'l' ? 0 : 1]));
    if (real.some(({ range }) => !Number.isFinite(range[0]))) return false;
    return leftByReduction(point, { real, imaginary: real.map(() => point.constant(0)) });
  });
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
