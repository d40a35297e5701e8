import type { FrequencySweep } from './frequency_sweep.js';
import { dipBelowZero, rootBetween } from './root_finding.js';

/** A continuous function of a response: of its denominator and numerator (real, imaginary each) from index `at` on. */
export type OfParts = (parts: Float64Array, at: number) => number;

/**
 * The frequencies (rad/s, ascending, to double precision) between two indices of a sweep at which a function of the
 * response changes sign. Pairs of zeros between neighbouring grid points are sought where the function nearly touches zero.
 */
export function zerosOver(sweep: FrequencySweep, of: OfParts, first: number, last: number): number[] {
  const { frequencies, parts, transfer } = sweep;
  const scratch = new Float64Array(4);
  const f = (frequency: number): number => {
    transfer.evaluate(frequency, scratch);
    return of(scratch, 0);
  };
  const values = new Float64Array(frequencies.length);
  for (let i = first; i <= last; i++) values[i] = of(parts, 4 * i);
  const result: number[] = [];
  for (let i = first; i < last; i++) {
    if (i > first && values[i] === 0 && values[i - 1] * values[i + 1] !== 0) result.push(frequencies[i]);
    if (values[i] * values[i + 1] < 0) result.push(rootBetween(f, frequencies[i], frequencies[i + 1]));
    if (i > first && isNearMiss(values, i)) {
      result.push(...pairBetween(f, frequencies[i - 1], frequencies[i + 1], Math.sign(values[i])));
    }
  }
  return result.sort((a, b) => a - b);
}

/** Whether the value at i is the nearest to zero among its neighbours, all of one sign, and near enough to deserve a search. */
function isNearMiss(values: Float64Array, i: number): boolean {
  const here = Math.abs(values[i]);
  if (!(here < 0.5) || here === 0) return false;
  if (values[i - 1] * values[i] <= 0 || values[i] * values[i + 1] <= 0) return false;
  return here <= Math.abs(values[i - 1]) && here <= Math.abs(values[i + 1]);
}

function pairBetween(f: (x: number) => number, a: number, b: number, sign: number): number[] {
  const turn = dipBelowZero((x) => sign * f(x), a, b);
  return turn === undefined ? [] : [rootBetween(f, a, turn), rootBetween(f, turn, b)];
}
