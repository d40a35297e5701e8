import type { SignalTrace } from '../kernel/trace.js';
import { pieceAt, sectionsOf, upperBound } from './sections.js';

/** The largest value of a trace between two times, and when it is reached first. */
export function largest(trace: SignalTrace, from: number, to: number): { value: number; time: number } {
  let best = { value: Number.NEGATIVE_INFINITY, time: from };
  for (let piece = pieceAt(trace, from); piece < trace.pieces && trace.times[piece] < to; piece++) {
    const bound = upperBound(trace, piece);
    if (bound <= best.value) continue;
    const whole = trace.times[piece] >= from && trace.times[piece + 1] <= to;
    const end = whole ? endThatReaches(trace, piece, bound) : undefined;
    if (end) {
      best = end;
      continue;
    }
    for (const section of sectionsOf(trace, piece, from, to)) {
      if (Number.isNaN(section.first) || Number.isNaN(section.last))
        return { value: Number.NaN, time: section.from };
      if (section.first > best.value) best = { value: section.first, time: section.from };
      if (section.last > best.value) best = { value: section.last, time: section.to };
    }
  }
  return best;
}

/** The end of a piece where the signal reaches the piece's upper bound, which then is its largest value. */
function endThatReaches(
  { times, record }: SignalTrace,
  piece: number,
  bound: number,
): { value: number; time: number } | undefined {
  if (record[4 * piece] === bound) return { value: bound, time: times[piece] };
  return record[4 * piece + 2] === bound ? { value: bound, time: times[piece + 1] } : undefined;
}

/** The smallest value of a trace between two times, and when it is reached first. */
export function smallest(trace: SignalTrace, from: number, to: number): { value: number; time: number } {
  const { value, time } = largest(scaled(trace, -1), from, to);
  return { value: -value, time };
}

/** A trace with all values multiplied by a factor. */
export function scaled(trace: SignalTrace, factor: number): SignalTrace {
  const record = new Float64Array(4 * trace.pieces);
  for (let i = 0; i < record.length; i++) record[i] = factor * trace.record[i];
  return { ...trace, record };
}

/** One trace less another of the same run. */
export function difference(a: SignalTrace, b: SignalTrace): SignalTrace {
  const record = new Float64Array(4 * a.pieces);
  for (let i = 0; i < record.length; i++) record[i] = a.record[i] - b.record[i];
  return { ...a, record };
}
