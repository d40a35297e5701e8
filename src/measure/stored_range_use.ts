import type { StoredNumbers } from '../loop/parts.js';
import { plainNumber } from '../spec/dimension.js';
import { coefficientKey } from './keys.js';
import { type FirmwareMeasure, measured, unformed } from './measure.js';

/** How much of its number format a coefficient takes. */
export const storedRangeUse: FirmwareMeasure = {
  description: {
    name: 'stored_range_use',
    basis: 'firmware',
    keys: [coefficientKey],
    dimension: () => plainNumber,
    ratio: false,
    better: 'lower',
    least: 0,
    most: 1,
    window: undefined,
    meaning:
      'max |x|/|end| over the numbers x of the coefficient, where end is the largest number of its fixed-point or integer format, for x below 0 the smallest: 1 where one stands at the end of its format, 0 where all are 0; a share; not of floating-point numbers, nor of a coefficient with a scale or an offset',
  },
  measure: ({ name, stored }) => {
    if (!stored)
      return unformed(
        `the numbers of '${name}' are not as they are stored; read the same numbers under a second name, without scale and offset`,
      );
    const ends = formatEnds(stored);
    if (!ends)
      return unformed(
        `the numbers of '${name}' are ${stored.format}, whose ends are far beyond any use; expected a fixed-point or integer format`,
      );
    return measured(
      stored.values.reduce((most, x) => Math.max(most, x < 0 ? x / ends.low : x / ends.high), 0),
    );
  },
};

/** The smallest and the largest number of a fixed-point or integer format; undefined for floating point. */
function formatEnds({ format, fractionalBits }: StoredNumbers): { low: number; high: number } | undefined {
  const written = /^(u?)(?:int(\d+)|q(\d+)\.(\d+))$/i.exec(format);
  if (!written || fractionalBits === undefined) return undefined;
  const [, unsigned, integer, whole, fraction] = written;
  const bits = integer === undefined ? Number(whole) + Number(fraction) : Number(integer);
  const quantum = 2 ** -fractionalBits;
  const steps = 2 ** (unsigned === '' ? bits - 1 : bits);
  return { low: unsigned === '' ? -steps * quantum : 0, high: (steps - 1) * quantum };
}
