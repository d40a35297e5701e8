import { type Curve, pieceAt, pointsOfPiece, scaled, upperBound } from './curve.js';
import { sectionsOf } from './sections.js';

/** A value of a curve and when it is reached first. */
export interface Extreme {
  value: number;
  time: number;
}

/** The largest value of a curve between two times, and when it is reached first. */
export function largest(curve: Curve, from: number, to: number): Extreme {
  let best = { value: Number.NEGATIVE_INFINITY, time: from };
  for (let piece = pieceAt(curve, from); piece < curve.pieces && curve.times[piece] < to; piece++) {
    const bound = upperBound(curve, piece);
    if (bound <= best.value) continue;
    const whole = curve.times[piece] >= from && curve.times[piece + 1] <= to;
    const end = whole ? endThatReaches(curve, piece, bound) : undefined;
    if (end) {
      best = end;
      continue;
    }
    for (const section of sectionsOf(curve, piece, from, to)) {
      if (Number.isNaN(section.first) || Number.isNaN(section.last))
        return { value: Number.NaN, time: section.from };
      if (section.first > best.value) best = { value: section.first, time: section.from };
      if (section.last > best.value) best = { value: section.last, time: section.to };
    }
  }
  return best;
}

/** The end of a piece where the signal reaches the piece's upper bound, which then is its largest value. */
function endThatReaches({ times, points }: Curve, piece: number, bound: number): Extreme | undefined {
  const at = pointsOfPiece * piece;
  if (points[at] === bound) return { value: bound, time: times[piece] };
  return points[at + pointsOfPiece - 1] === bound ? { value: bound, time: times[piece + 1] } : undefined;
}

/** The smallest value of a curve between two times, and when it is reached first. */
export function smallest(curve: Curve, from: number, to: number): Extreme {
  const { value, time } = largest(scaled(curve, -1), from, to);
  return { value: -value, time };
}

/** The largest size of a curve between two times. */
export function largestSize(curve: Curve, from: number, to: number): number {
  return Math.max(largest(curve, from, to).value, -smallest(curve, from, to).value);
}
