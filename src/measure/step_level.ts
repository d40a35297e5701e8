import { type Curve, lowerBound, pieceAt, scaled, upperBound } from './curve.js';
import { type MeasureResult, type TargetStep, unformed } from './measure.js';
import { sectionsOf, timeAtLevel } from './sections.js';

/**
 * The response of a step as a share of it: 0 at the target's value before, 1 at its value after, whichever way the step
 * goes.
 */
export function stepShare(of: Curve, { before, after }: TargetStep): Curve {
  const size = after - before;
  return scaled(of, 1 / size, -before / size);
}

/** The first time between two times at which a curve is at or above a level; undefined where it never is. */
export function firstReach(curve: Curve, level: number, from: number, to: number): number | undefined {
  for (let piece = pieceAt(curve, from); piece < curve.pieces && curve.times[piece] < to; piece++) {
    if (upperBound(curve, piece) < level) continue;
    if (lowerBound(curve, piece) >= level) return Math.max(from, curve.times[piece]);
    for (const section of sectionsOf(curve, piece, from, to)) {
      if (section.first >= level) return section.from;
      if (section.last >= level) return timeAtLevel(section, level);
    }
  }
  return undefined;
}

/** A response that stays below a share of the step to the end of the window of so many seconds. */
export function neverReached(level: number, reached: number, span: number): MeasureResult {
  if (Number.isNaN(reached)) return unformed('the response is not a number');
  const percent = (share: number): string => `${Number((100 * share).toPrecision(4))} %`;
  const time = Number(span.toPrecision(4));
  return {
    kind: 'never',
    why: `longer than ${time} s: reaches ${percent(reached)} of the step, not ${percent(level)}`,
    left: level - reached,
  };
}
