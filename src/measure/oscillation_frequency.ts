import { frequencyDimension } from '../spec/dimension.js';
import type { Curve } from './curve.js';
import { largest, smallest } from './extremes.js';
import { signalKey, windowKeys } from './keys.js';
import { measured, type TraceMeasure, unformed, type Window } from './measure.js';
import { allSections, timeAtLevel } from './sections.js';

/** A passage counts after the signal was below the middle by this share of the amplitude: noise alone makes none. */
const readiness = 0.5;

/** How often a signal passes the middle of its range upwards in a window. */
export const oscillationFrequency: TraceMeasure = {
  description: {
    name: 'oscillation_frequency',
    basis: 'trace',
    keys: [signalKey, ...windowKeys],
    dimension: () => frequencyDimension,
    ratio: false,
    better: 'lower',
    least: 0,
    window: 'from_first_event',
    meaning:
      '(n − 1)/(time from the first to the last) of the n upward passages of `of` through (max + min)/2 of the window, each after being below it by half the amplitude; Hz; 0 with fewer than two passages',
  },
  measure: ({ of, window }) => {
    const high = largest(of, window.from, window.until).value;
    const low = smallest(of, window.from, window.until).value;
    if (!Number.isFinite(high - low)) return unformed('the signal is not a number');
    const passages = upwardPassages(of, window, (high + low) / 2, (readiness * (high - low)) / 2);
    const span = passages.length < 2 ? 0 : passages[passages.length - 1] - passages[0];
    return measured(span > 0 ? (passages.length - 1) / span : 0);
  },
};

function upwardPassages(of: Curve, { from, until }: Window, middle: number, below: number): number[] {
  const passages: number[] = [];
  let ready = false;
  for (const section of allSections(of, from, until)) {
    if (section.first <= middle - below) ready = true;
    if (ready && section.first >= middle) {
      passages.push(section.from);
      ready = false;
    }
    if (ready && section.last >= middle) {
      passages.push(timeAtLevel(section, middle));
      ready = false;
    }
    if (section.last <= middle - below && below > 0) ready = true;
  }
  return passages;
}
