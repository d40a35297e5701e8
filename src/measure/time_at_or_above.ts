import type { SignalTrace } from '../kernel/trace.js';
import { lowerBound, pieceAt, sectionsOf, timeAtLevel, upperBound } from './sections.js';

/** How long a trace is at or above a level between two times, s. */
export function timeAtOrAbove(trace: SignalTrace, level: number, from: number, to: number): number {
  let total = 0;
  for (let piece = pieceAt(trace, from); piece < trace.pieces && trace.times[piece] < to; piece++) {
    if (upperBound(trace, piece) < level) continue;
    const whole = lowerBound(trace, piece) >= level;
    if (whole) total += Math.min(to, trace.times[piece + 1]) - Math.max(from, trace.times[piece]);
    else total += timeInPiece(trace, piece, level, from, to);
  }
  return total;
}

function timeInPiece(trace: SignalTrace, piece: number, level: number, from: number, to: number): number {
  let total = 0;
  for (const section of sectionsOf(trace, piece, from, to)) {
    if (Number.isNaN(section.first) || Number.isNaN(section.last)) return Number.NaN;
    const [first, last] = [section.first >= level, section.last >= level];
    if (first && last) total += section.to - section.from;
    else if (first) total += timeAtLevel(section, level) - section.from;
    else if (last) total += section.to - timeAtLevel(section, level);
  }
  return total;
}
