import { plainNumber } from '../spec/dimension.js';
import { coefficientKey } from './keys.js';
import { type FirmwareMeasure, type MeasureResult, measured, unformed } from './measure.js';

/** How far a coefficient is from what was latched. */
export const changeSinceLatched: FirmwareMeasure = {
  description: {
    name: 'change_since_latched',
    basis: 'firmware',
    keys: [coefficientKey],
    dimension: () => plainNumber,
    ratio: false,
    better: 'lower',
    least: 0,
    window: undefined,
    againstLatched: true,
    meaning:
      'max |x − x₀|/|x₀| over the numbers x of the coefficient, where x₀ stands in the same place of the latched reference: 0 where nothing changed, infinite where a number was 0 and no longer is; a share; not of a coefficient without latched numbers to compare with (no reference yet, new to it, another unit, another count of numbers); `pawl latch` accepts any change, whatever the limit',
  },
  measure: ({ name, values, latched }) =>
    typeof latched === 'string' ? unformed(latched) : largestChange(name, values, latched),
};

function largestChange(name: string, today: readonly number[], latched: readonly number[]): MeasureResult {
  const shares = today.map((value, at) => changeOf(latched[at], value));
  const most = shares.reduce((one, other) => Math.max(one, other));
  const at = shares.indexOf(most);
  const shown = today.length === 1 ? name : `${name}[${at}]`;
  return measured(most, most === 0 ? undefined : `'${shown}' ${latched[at]} → ${today[at]}`);
}

/** Of two numbers that are the same it is 0, infinite ones among them; NaN where one of them is not a number. */
function changeOf(latched: number, today: number): number {
  if (latched === today) return 0;
  return Math.abs(today - latched) / Math.abs(latched);
}
