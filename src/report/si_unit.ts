import type { Dimension, Unit } from '../spec/spec.js';

/** The base units in the order of a dimension's exponents, mass first when written. */
const baseUnits = ['m', 'kg', 's', 'A', 'K', 'mol', 'cd', 'cycle'];
const writingOrder = [1, 0, 2, 3, 4, 5, 6, 7];

/** Derived units of the SI that stand for themselves (SI Brochure, 9th edition, 2019, table 4). */
const derived: Readonly<Record<string, string>> = {
  '1,1,-2,0,0,0,0,0': 'N',
  '-1,1,-2,0,0,0,0,0': 'Pa',
  '2,1,-2,0,0,0,0,0': 'N*m',
  '2,1,-3,0,0,0,0,0': 'W',
  '2,1,-3,-1,0,0,0,0': 'V',
  '2,1,-3,-2,0,0,0,0': 'ohm',
  '0,0,-1,0,0,0,0,1': 'Hz',
};

const startsWithAngle = /^([a-zµμ]?rad|deg|°|arcmin|arcsec|rpm)\b|^°/;

/** The SI unit of a number whose unit was written so: "s" for ms, "rad" for deg, "1" for per cent, dB and counts. */
export function siUnit({ text, dimension, scale }: Unit): string {
  const angle = startsWithAngle.test(text);
  if (dimension.every((exponent) => exponent === 0)) return angle ? 'rad' : '1';
  if (scale === 1) return text;
  const known = derived[dimension.join(',')];
  if (known) return known;
  return angle ? product(dimension, ['rad']) : product(dimension, []);
}

function product(dimension: Dimension, first: readonly string[]): string {
  const factors = writingOrder.map((at) => ({ unit: baseUnits[at], power: dimension[at] }));
  const above = [...first, ...factors.filter(({ power }) => power > 0).map(raised)];
  const below = factors
    .filter(({ power }) => power < 0)
    .map(({ unit, power }) => raised({ unit, power: -power }));
  const top = above.length === 0 ? '1' : above.join('*');
  if (below.length === 0) return top;
  return below.length === 1 ? `${top}/${below[0]}` : `${top}/(${below.join('*')})`;
}

function raised({ unit, power }: { unit: string; power: number }): string {
  return power === 1 ? unit : `${unit}^${power}`;
}
