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
 * The monotone sections of one piece of a trace between two times, in order. The cubic is cut where its rate is zero, so
 * that extremes and crossings between the samples are found, not guessed.
 */
export function sectionsOf(trace: SignalTrace, piece: number, from: number, to: number): Section[] {
  const [t0, t1] = [trace.times[piece], trace.times[piece + 1]];
  const [start, end] = [Math.max(from, t0), Math.min(to, t1)];
  const h = t1 - t0;
  const at = 4 * piece;
  const { record } = trace;
  const [y0, r0, y1, r1] = [record[at], record[at + 1] * h, record[at + 2], record[at + 3] * h];
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

/** The piece that is under way at a time, or the last one: the later one where two meet. */
export function pieceAt({ times, pieces }: SignalTrace, time: number): number {
  let [low, high] = [0, pieces - 1];
  while (low < high) {
    const middle = (low + high + 1) >> 1;
    if (times[middle] <= time) low = middle;
    else high = middle - 1;
  }
  return low;
}

/**
 * No value of a piece is above this: a cubic stays within the hull of its control points (Bernstein form).
 * Not-a-number where the piece has one.
 */
export function upperBound({ record, times }: SignalTrace, piece: number): number {
  const third = (times[piece + 1] - times[piece]) / 3;
  const at = 4 * piece;
  const first = record[at];
  const last = record[at + 2];
  return Math.max(first, first + third * record[at + 1], last - third * record[at + 3], last);
}

/** No value of a piece is below this. */
export function lowerBound({ record, times }: SignalTrace, piece: number): number {
  const third = (times[piece + 1] - times[piece]) / 3;
  const at = 4 * piece;
  const first = record[at];
  const last = record[at + 2];
  return Math.min(first, first + third * record[at + 1], last - third * record[at + 3], last);
}
