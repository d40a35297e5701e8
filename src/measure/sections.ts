import type { SignalTrace } from '../kernel/trace.js';

/** A stretch of a trace on which the signal only rises or only falls: times in s, values in SI. */
export interface Section {
  from: number;
  to: number;
  first: number;
  last: number;
  /** Value at a time inside the section. */
  at: (time: number) => number;
}

/**
 * The monotone sections of a trace between two times, in order; `latestFirst` gives them from the end. The cubic of each
 * piece is cut where its rate is zero, so that extremes and crossings between the samples are found, not guessed.
 */
export function* sections(
  trace: SignalTrace,
  from: number,
  to: number,
  latestFirst = false,
): Generator<Section> {
  const last = trace.pieces - 1;
  for (let k = 0; k <= last; k++) {
    const piece = latestFirst ? last - k : k;
    const start = Math.max(from, trace.times[piece]);
    const end = Math.min(to, trace.times[piece + 1]);
    if (start > end || (start === end && from !== to)) continue;
    const own = sectionsOfPiece(trace, piece, start, end);
    yield* latestFirst ? own.reverse() : own;
  }
}

function sectionsOfPiece(trace: SignalTrace, piece: number, start: number, end: number): Section[] {
  const [t0, t1] = [trace.times[piece], trace.times[piece + 1]];
  const h = t1 - t0;
  const at = 4 * piece;
  const [y0, r0, y1, r1] = [
    trace.record[at],
    trace.record[at + 1] * h,
    trace.record[at + 2],
    trace.record[at + 3] * h,
  ];
  // y = y0 + r0·s + c·s² + d·s³ with s from 0 to 1 (Hermite).
  const rise = y1 - y0;
  const c = 3 * rise - 2 * r0 - r1;
  const d = r0 + r1 - 2 * rise;
  const valueAt = (time: number): number => {
    if (time === t1) return y1;
    const s = (time - t0) / h;
    return y0 + s * (r0 + s * (c + s * d));
  };
  const cuts = zerosOfRate(r0, c, d)
    .map((s) => t0 + s * h)
    .filter((time) => time > start && time < end);
  const times = [start, ...cuts, end];
  const values = times.map(valueAt);
  return times
    .slice(1)
    .map((time, i) => ({ from: times[i], to: time, first: values[i], last: values[i + 1], at: valueAt }));
}

/** Zeros of r0 + 2c·s + 3d·s² inside 0 … 1, in order; the form avoids cancellation. */
function zerosOfRate(r0: number, c: number, d: number): number[] {
  if (r0 === 0 && c === 0 && d === 0) return [];
  const discriminant = c * c - 3 * d * r0;
  if (!(discriminant >= 0)) return [];
  const q = -(c + (c < 0 ? -1 : 1) * Math.sqrt(discriminant));
  return [q / (3 * d), r0 / q].filter((s) => s > 0 && s < 1).sort((a, b) => a - b);
}

/** The time in a monotone section at which the signal has a level between its two ends, to the last bit (bisection). */
export function timeAtLevel(section: Section, level: number): number {
  let [a, b] = [section.from, section.to];
  const rising = section.last > section.first;
  for (let round = 0; round < 200; round++) {
    const middle = a + (b - a) / 2;
    if (middle <= a || middle >= b) break;
    if (section.at(middle) < level === rising) a = middle;
    else b = middle;
  }
  return b;
}

/** The largest value of a trace between two times, and when it is reached first. */
export function largest(trace: SignalTrace, from: number, to: number): { value: number; time: number } {
  let best = { value: Number.NEGATIVE_INFINITY, time: from };
  for (const section of sections(trace, from, to)) {
    if (Number.isNaN(section.first) || Number.isNaN(section.last))
      return { value: Number.NaN, time: section.from };
    if (section.first > best.value) best = { value: section.first, time: section.from };
    if (section.last > best.value) best = { value: section.last, time: section.to };
  }
  return best;
}

/** The smallest value of a trace between two times, and when it is reached first. */
export function smallest(trace: SignalTrace, from: number, to: number): { value: number; time: number } {
  const { value, time } = largest(scaled(trace, -1), from, to);
  return { value: -value, time };
}

/** How long a trace is at or above a level between two times, s. */
export function timeAtOrAbove(trace: SignalTrace, level: number, from: number, to: number): number {
  let total = 0;
  for (const section of sections(trace, from, to)) {
    const [first, last] = [section.first >= level, section.last >= level];
    if (first && last) total += section.to - section.from;
    else if (first) total += timeAtLevel(section, level) - section.from;
    else if (last) total += section.to - timeAtLevel(section, level);
  }
  return total;
}

/** A trace with all values multiplied by a factor. */
export function scaled(trace: SignalTrace, factor: number): SignalTrace {
  return { ...trace, record: trace.record.subarray(0, 4 * trace.pieces).map((value) => factor * value) };
}

/** One trace less another of the same run. */
export function difference(a: SignalTrace, b: SignalTrace): SignalTrace {
  return { ...a, record: a.record.subarray(0, 4 * a.pieces).map((value, i) => value - b.record[i]) };
}
