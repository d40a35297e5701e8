import { type Curve, valueBefore } from './curve.js';
import { signalKey, windowKeys } from './keys.js';
import { measured, type TraceMeasure, type Window } from './measure.js';
import { allSections } from './sections.js';

/** The way that a signal goes up and down in a window, jumps included (total variation). */
export const travel: TraceMeasure = {
  description: {
    name: 'travel',
    basis: 'trace',
    keys: [signalKey, ...windowKeys],
    dimension: (of) => of,
    ratio: false,
    better: 'lower',
    least: 0,
    window: 'from_first_event',
    meaning:
      'sum of all ways up and down of `of` in the window, jumps included, also one at its beginning; in the unit of `of`',
  },
  measure: ({ of, window }) => measured(wayOf(of, window)),
};

function wayOf(of: Curve, { from, until }: Window): number {
  let way = 0;
  let last = valueBefore(of, from);
  for (const section of allSections(of, from, until)) {
    way += Math.abs(section.first - last);
    way += Math.abs(section.last - section.first);
    last = section.last;
  }
  return way;
}
