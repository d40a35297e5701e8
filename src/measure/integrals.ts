import { integralOf, partOf, productOf, signChanges } from './bernstein.js';
import { type Curve, pieceAt, pieceOf } from './curve.js';
import type { Window } from './measure.js';

/** A part of a curve between two times (s), by its control points. */
export interface Part {
  from: number;
  to: number;
  points: ArrayLike<number>;
}

/** The pieces of a curve, cut to a window. */
export function* partsOf(curve: Curve, { from, until }: Window): Generator<Part> {
  const { times, pieces } = curve;
  for (let piece = pieceAt(curve, from); piece < pieces && times[piece] < until; piece++) {
    const [t0, t1] = [times[piece], times[piece + 1]];
    const [start, end] = [Math.max(from, t0), Math.min(until, t1)];
    if (!(end > start)) continue;
    const whole = start === t0 && end === t1;
    const points = pieceOf(curve, piece);
    const place = (time: number): number => (time === t1 ? 1 : (time - t0) / (t1 - t0));
    yield { from: start, to: end, points: whole ? points : partOf(points, place(start), place(end)) };
  }
}

/** The size of a curve in a window: its parts, cut where the sign changes, those below zero turned up. */
export function* sizeParts(curve: Curve, window: Window): Generator<Part> {
  for (const part of partsOf(curve, window)) {
    const cuts = signChanges(part.points);
    if (cuts.length === 0) {
      yield integralOf(part.points) < 0 ? turned(part) : part;
      continue;
    }
    const places = [0, ...cuts, 1];
    const time = (place: number): number =>
      place === 1 ? part.to : part.from + place * (part.to - part.from);
    for (let i = 1; i < places.length; i++) {
      const points = partOf(part.points, places[i - 1], places[i]);
      const own = { from: time(places[i - 1]), to: time(places[i]), points };
      yield integralOf(points) < 0 ? turned(own) : own;
    }
  }
}

function turned(part: Part): Part {
  return { ...part, points: Array.from(part.points, (point) => -point) };
}

/** ∫ y dt over a window. */
export function integral(curve: Curve, window: Window): number {
  let sum = 0;
  for (const { from, to, points } of partsOf(curve, window)) sum += (to - from) * integralOf(points);
  return sum;
}

/** ∫ |y| dt over a window. */
export function absoluteIntegral(curve: Curve, window: Window): number {
  let sum = 0;
  for (const { from, to, points } of sizeParts(curve, window)) sum += (to - from) * integralOf(points);
  return sum;
}

/** ∫ (t − start)·|y| dt over a window that begins at its start. */
export function timeWeightedIntegral(curve: Curve, window: Window): number {
  let sum = 0;
  for (const { from, to, points } of sizeParts(curve, window)) {
    const time = [from - window.from, to - window.from];
    sum += (to - from) * integralOf(productOf(time, points));
  }
  return sum;
}

/** ∫ y² dt over a window. */
export function squareIntegral(curve: Curve, window: Window): number {
  let sum = 0;
  for (const { from, to, points } of partsOf(curve, window)) {
    sum += (to - from) * integralOf(productOf(points, points));
  }
  return sum;
}

/** The root of the mean square over a window. */
export function rootMeanSquare(curve: Curve, window: Window): number {
  return Math.sqrt(Math.max(0, squareIntegral(curve, window)) / (window.until - window.from));
}
