import { type Curve, lowerBound, pieceAt, upperBound } from './curve.js';
import { sectionsOf, timeAtLevel } from './sections.js';

/** When a curve enters a band for good, or its value where it is outside at the end; or that it is not a number. */
export type Entry =
  | { kind: 'inside'; time: number }
  | { kind: 'outside'; value: number }
  | { kind: 'not_a_number' };

/** The last entry of a curve into low … high between two times; `from` where it is inside all the time. */
export function lastEntry(curve: Curve, low: number, high: number, from: number, to: number): Entry {
  const outside = (value: number): boolean => value < low || value > high;
  const first = pieceAt(curve, from);
  for (let piece = pieceAt(curve, to); piece >= first; piece--) {
    if (curve.times[piece] >= to) continue;
    if (upperBound(curve, piece) <= high && lowerBound(curve, piece) >= low) continue;
    for (const section of sectionsOf(curve, piece, from, to).reverse()) {
      if (Number.isNaN(section.first) || Number.isNaN(section.last)) return { kind: 'not_a_number' };
      if (outside(section.last)) {
        return section.to === to
          ? { kind: 'outside', value: section.last }
          : { kind: 'inside', time: section.to };
      }
      if (outside(section.first)) {
        return { kind: 'inside', time: timeAtLevel(section, section.first < low ? low : high) };
      }
    }
  }
  return { kind: 'inside', time: from };
}
