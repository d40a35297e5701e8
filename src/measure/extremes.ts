import { type Curve, lowerBound, pieceAt, pointsOfPiece, upperBound } from './curve.js';
import { sectionsOf } from './sections.js';

/** A value of a curve and when it is reached first. */
export interface Extreme {
  value: number;
  time: number;
}

/** The largest value of a curve between two times, and when it is reached first. */
export function largest(curve: Curve, from: number, to: number): Extreme {
  return farthest(curve, 1, from, to);
}

/** The smallest value of a curve between two times, and when it is reached first. */
export function smallest(curve: Curve, from: number, to: number): Extreme {
  const { value, time } = farthest(curve, -1, from, to);
  return { value: -value, time };
}

/** The largest value of side times the curve, side being 1 or −1. */
function farthest(curve: Curve, side: 1 | -1, from: number, to: number): Extreme {
  let best = { value: Number.NEGATIVE_INFINITY, time: from };
  for (let piece = pieceAt(curve, from); piece < curve.pieces && curve.times[piece] < to; piece++) {
    const bound = side > 0 ? upperBound(curve, piece) : -lowerBound(curve, piece);
    if (bound <= best.value) continue;
    const whole = curve.times[piece] >= from && curve.times[piece + 1] <= to;
    const end = whole ? endThatReaches(curve, piece, side * bound) : undefined;
    if (end !== undefined) {
      best = { value: bound, time: end };
      continue;
    }
    for (const section of sectionsOf(curve, piece, from, to)) {
      const [first, last] = [side * section.first, side * section.last];
      if (Number.isNaN(first) || Number.isNaN(last)) return { value: Number.NaN, time: section.from };
      if (first > best.value) best = { value: first, time: section.from };
      if (last > best.value) best = { value: last, time: section.to };
    }
  }
  return best;
}

/** The time of the end of a piece where the signal reaches the piece's bound, which then is its farthest value. */
function endThatReaches({ times, points }: Curve, piece: number, bound: number): number | undefined {
  const at = pointsOfPiece * piece;
  if (points[at] === bound) return times[piece];
  return points[at + pointsOfPiece - 1] === bound ? times[piece + 1] : undefined;
}

/** The largest size of a curve between two times. */
export function largestSize(curve: Curve, from: number, to: number): number {
  return Math.max(largest(curve, from, to).value, -smallest(curve, from, to).value);
}
