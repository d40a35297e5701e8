import { differences, signChanges, valueAt } from './bernstein.js';
import { type Curve, pieceAt, pieceOf } from './curve.js';

/** A stretch of a curve on which the signal only rises or only falls: times in s, values in SI. */
export interface Section {
  from: number;
  to: number;
  first: number;
  last: number;
  /** Value at a time inside the section. */
  at: (time: number) => number;
}

/**
 * The monotone sections of one piece of a curve between two times, in order. The piece is cut where its rate is zero, so
 * that extremes and crossings between the samples are found, not guessed.
 */
export function sectionsOf(curve: Curve, piece: number, from: number, to: number): Section[] {
  const [t0, t1] = [curve.times[piece], curve.times[piece + 1]];
  const [start, end] = [Math.max(from, t0), Math.min(to, t1)];
  const points = pieceOf(curve, piece);
  const h = t1 - t0;
  const at = (time: number): number =>
    time === t1 ? points[points.length - 1] : valueAt(points, (time - t0) / h);
  const cuts = signChanges(differences(points))
    .map((s) => t0 + s * h)
    .filter((time) => time > start && time < end);
  const times = [start, ...cuts, end];
  const values = times.map(at);
  return times
    .slice(1)
    .map((time, i) => ({ from: times[i], to: time, first: values[i], last: values[i + 1], at }));
}

/** The monotone sections of a curve between two times, one after another. */
export function* allSections(curve: Curve, from: number, to: number): Generator<Section> {
  for (let piece = pieceAt(curve, from); piece < curve.pieces && curve.times[piece] < to; piece++) {
    yield* sectionsOf(curve, piece, from, to);
  }
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
