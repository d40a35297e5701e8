import { productOf, rateDimension } from '../spec/dimension.js';
import { differences, signChanges, valueAt } from './bernstein.js';
import { type Curve, valueBefore } from './curve.js';
import { partsOf } from './integrals.js';
import { signalKey, windowKeys } from './keys.js';
import { measured, type TraceMeasure, type Window } from './measure.js';

/**
 * The fastest change of a signal in a window: max |d(of)/dt| where it moves at any time (infinite where it jumps), and the
 * largest change from one instant to the next over the time between them where it stays in between.
 */
export const slewRate: TraceMeasure = {
  description: {
    name: 'slew_rate',
    basis: 'trace',
    keys: [signalKey, ...windowKeys],
    dimension: (of) => productOf(of, rateDimension),
    ratio: false,
    better: 'lower',
    least: 0,
    window: 'from_first_event',
    meaning:
      'max |d(of)/dt| in the window, infinite at a jump; of a sampled or held signal the largest change from one instant to the next over the time between them; in the unit of `of` per s',
  },
  measure: ({ of, window, period }) =>
    measured(period === undefined ? fastest(of, window) : largestJump(of, window) / period),
};

function largestJump(of: Curve, window: Window): number {
  let most = 0;
  let last = valueBefore(of, window.from);
  for (const { points } of partsOf(of, window)) {
    most = Math.max(most, Math.abs(points[0] - last));
    last = points[points.length - 1];
  }
  return most;
}

/** Neighbouring pieces of a moving signal meet to this share of their size. */
const sameValue = 1e-9;

function fastest(of: Curve, window: Window): number {
  let most = 0;
  let last = valueBefore(of, window.from);
  for (const { from, to, points } of partsOf(of, window)) {
    const size = Math.max(Math.abs(points[0]), Math.abs(last));
    if (Math.abs(points[0] - last) > sameValue * size) return Number.POSITIVE_INFINITY;
    last = points[points.length - 1];
    const rate = differences(points).map((change) => ((points.length - 1) * change) / (to - from));
    const places = [0, ...signChanges(differences(rate)), 1];
    most = Math.max(most, ...places.map((place) => Math.abs(valueAt(rate, place))));
  }
  return most;
}
