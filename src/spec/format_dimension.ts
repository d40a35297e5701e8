import { baseUnits, isPlain, powerOf, quotientOf, rateDimension, sameDimension } from './dimension.js';
import type { Dimension } from './spec.js';
import { unitSymbols } from './unit_table.js';

/** Derived units tried in this order; the joule is left out, since N*m serves torque and energy alike, and so on. */
const named = ['N', 'W', 'V', 'A', 'Pa', 'ohm', 'Hz', 'H', 'F', 'K'];

const mass = baseUnits.indexOf('kg');

interface Writing {
  text: string;
  /** How long it reads: a factor for each power, and more where nothing stands above the line. */
  factors: number;
}

/** A dimension in units that people know: "N*m", "kg*m^2", "V/K", "a plain number". */
export function formatDimension(dimension: Dimension): string {
  if (isPlain(dimension)) return 'a plain number';
  if (sameDimension(dimension, rateDimension)) return '1/s (rad/s)';
  let best = inBaseUnits(undefined, dimension);
  for (const symbol of named) {
    const unit = unitSymbols.find((candidate) => candidate.symbol === symbol)!;
    for (const power of [1, -1, 2, -2]) {
      const rest = quotientOf(dimension, powerOf(unit.dimension, power));
      // N/kg for m/s^2 would be no help: a unit with mass in it must account for all of the mass.
      if (unit.dimension[mass] !== 0 && rest[mass] !== 0) continue;
      const writing = inBaseUnits({ symbol, power }, rest);
      if (writing.factors < best.factors) best = writing;
    }
  }
  return best.text;
}

/** The same as the text of a unit that can be read again: empty for a plain number, "1/s" for a rate. */
export function unitOfDimension(dimension: Dimension): string {
  if (isPlain(dimension)) return '';
  if (sameDimension(dimension, rateDimension)) return '1/s';
  return formatDimension(dimension);
}

function inBaseUnits(first: { symbol: string; power: number } | undefined, rest: Dimension): Writing {
  const factors = baseUnits.map((symbol, at) => ({ symbol: symbol as string, power: rest[at] }));
  // Mass first, as people write it: kg*m^2.
  const ordered = [factors[1], factors[0], ...factors.slice(2)];
  const all = (first === undefined ? ordered : [first, ...ordered]).filter(({ power }) => power !== 0);
  return {
    text: joined(all),
    factors: all.reduce(
      (sum, { power }) => sum + Math.abs(power),
      all.some(({ power }) => power > 0) ? 0 : 1.5,
    ),
  };
}

function joined(factors: { symbol: string; power: number }[]): string {
  const above = factors.filter(({ power }) => power > 0).map(({ symbol, power }) => raised(symbol, power));
  const below = factors.filter(({ power }) => power < 0).map(({ symbol, power }) => raised(symbol, -power));
  const top = above.length === 0 ? '1' : above.join('*');
  if (below.length === 0) return top;
  return below.length === 1 ? `${top}/${below[0]}` : `${top}/(${below.join('*')})`;
}

function raised(symbol: string, power: number): string {
  return power === 1 ? symbol : `${symbol}^${Number(power.toPrecision(6))}`;
}

/** Both sides of a wrong dimension: "must be in N*m, but this is V". */
export function formatMismatch(found: Dimension, expected: Dimension): string {
  const inOrBe = isPlain(expected) ? 'must be' : 'must be in';
  return `${inOrBe} ${formatDimension(expected)}, but this is ${formatDimension(found)}`;
}
