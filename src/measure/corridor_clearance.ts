import type { BoundPoint } from '../spec/statement.js';
import type { Curve } from './curve.js';
import { CurveBuilder, sumOf } from './curve_arithmetic.js';
import { smallest } from './extremes.js';
import { responseKey } from './keys.js';
import { measured, type TraceMeasure, unformed } from './measure.js';

/** The least distance of a response from bounds over time that are straight between their corners. */
export const corridorClearance: TraceMeasure = {
  description: {
    name: 'corridor_clearance',
    basis: 'trace',
    keys: [
      responseKey,
      { name: 'lower', kind: 'bound', optional: true, meaning: 'corners of the lower bound' },
      { name: 'upper', kind: 'bound', optional: true, meaning: 'corners of the upper bound' },
    ],
    dimension: (of) => of,
    ratio: false,
    better: 'higher',
    window: undefined,
    meaning:
      'least of upper − of and of − lower over the times of each bound, which is straight between its corners; in the unit of `of`; negative where it leaves the corridor',
  },
  measure: ({ of, bounds }) => {
    const { lower, upper } = bounds;
    const distances = [
      ...(upper ? [clearance(of, upper, -1)] : []),
      ...(lower ? [clearance(of, lower, 1)] : []),
    ];
    return distances.length === 0
      ? unformed('neither `lower` nor `upper` is given')
      : measured(Math.min(...distances));
  },
};

/** Smallest of side·(of − bound). */
function clearance(of: Curve, bound: readonly BoundPoint[], side: number): number {
  const builder = new CurveBuilder();
  bound.slice(1).forEach((corner, i) => {
    const before = bound[i];
    const step = (corner.value - before.value) / 5;
    const points = Array.from(
      { length: 6 },
      (_, k) => -side * (k === 5 ? corner.value : before.value + k * step),
    );
    if (corner.time > before.time) builder.add(before.time, points);
  });
  const [first, last] = [bound[0].time, bound[bound.length - 1].time];
  const gap = sumOf(builder.build(last), of, side);
  return smallest(gap, first, Math.min(last, of.times[of.pieces])).value;
}
