import type { Curve } from './curve.js';
import { lowerBound, pieceAt, upperBound } from './curve.js';
import { sectionsOf, timeAtLevel } from './sections.js';

/** A stretch of time, s. */
interface Stretch {
  from: number;
  to: number;
}

/** How long a curve is at or above a level between two times, s. */
export function timeAtOrAbove(curve: Curve, level: number, from: number, to: number): number {
  let total = 0;
  for (const stretch of stretchesAtOrAbove(curve, level, from, to)) total += stretch.to - stretch.from;
  return total;
}

/** The longest time without a break that a curve is at or above a level between two times, s. */
export function longestTimeAtOrAbove(curve: Curve, level: number, from: number, to: number): number {
  let longest = 0;
  let current: Stretch = { from, to: from };
  for (const stretch of stretchesAtOrAbove(curve, level, from, to)) {
    current = stretch.from === current.to ? { from: current.from, to: stretch.to } : stretch;
    longest = Math.max(longest, current.to - current.from);
    // A stretch that is not a number makes the result none either.
    if (Number.isNaN(stretch.to)) return Number.NaN;
  }
  return longest;
}

/** In order; neighbouring ones may touch. */
function* stretchesAtOrAbove(curve: Curve, level: number, from: number, to: number): Generator<Stretch> {
  const { times, pieces } = curve;
  for (let piece = pieceAt(curve, from); piece < pieces && times[piece] < to; piece++) {
    if (upperBound(curve, piece) < level) continue;
    if (lowerBound(curve, piece) >= level) {
      yield { from: Math.max(from, times[piece]), to: Math.min(to, times[piece + 1]) };
      continue;
    }
    for (const section of sectionsOf(curve, piece, from, to)) {
      const [first, last] = [section.first >= level, section.last >= level];
      if (Number.isNaN(section.first) || Number.isNaN(section.last))
        yield { from: Number.NaN, to: Number.NaN };
      else if (first && last) yield { from: section.from, to: section.to };
      else if (first) yield { from: section.from, to: timeAtLevel(section, level) };
      else if (last) yield { from: timeAtLevel(section, level), to: section.to };
    }
  }
}
