import type { Run } from '../kernel/trace.js';
import { valueAt } from './bernstein.js';

/** Control points of one piece of a curve: it is of degree five. */
export const pointsOfPiece = 6;

/**
 * A signal over time in pieces: piece i runs from `times[i]` to `times[i + 1]` (s) and is the polynomial of degree five
 * whose control points (SI) stand at 6·i to 6·i + 5. From one piece to the next it may jump.
 */
export interface Curve {
  times: Float64Array;
  points: Float64Array;
  pieces: number;
  /** Arrays for curves that are made of this one, where it belongs to a run: the next run uses them again. */
  lend?: (length: number) => Float64Array;
}

/**
 * The curve of a recorded signal: between two records it has the value, the rate and the change of the rate of both ends
 * (Hermite), so that its error falls with the sixth power of their distance. Where a rate is not finite at an end, as that
 * of a square root at zero, the piece is straight.
 * @param signal index of the signal among the records.
 * @param rate index of the signal's rate among the records; undefined where that does not change between records.
 */
export function curveOf(
  { times, records, pieces, lend }: Run,
  signal: number,
  rate: number | undefined,
): Curve {
  const points = lend(pointsOfPiece * pieces);
  const values = records[signal];
  const rates = rate === undefined ? undefined : records[rate];
  for (let piece = 0; piece < pieces; piece++) {
    const at = 4 * piece;
    const to = pointsOfPiece * piece;
    const h = times[piece + 1] - times[piece];
    const first = values[at];
    const last = values[at + 2];
    let firstMove = (h * values[at + 1]) / 5;
    let lastMove = (h * values[at + 3]) / 5;
    let firstBend = rates ? (h * h * rates[at + 1]) / 20 : 0;
    let lastBend = rates ? (h * h * rates[at + 3]) / 20 : 0;
    if (!Number.isFinite(firstMove + lastMove + firstBend + lastBend)) {
      firstMove = lastMove = (last - first) / 5;
      firstBend = lastBend = 0;
    }
    points[to] = first;
    points[to + 1] = first + firstMove;
    points[to + 2] = first + 2 * firstMove + firstBend;
    points[to + 3] = last - 2 * lastMove + lastBend;
    points[to + 4] = last - lastMove;
    points[to + 5] = last;
  }
  return { times, points, pieces, lend };
}

/** An array for a curve that is made of another one. */
export function pointsLike({ points, lend }: Curve): Float64Array {
  return lend ? lend(points.length) : new Float64Array(points.length);
}

/** Time at which a curve ends, s. */
export function endOf({ times, pieces }: Curve): number {
  return times[pieces];
}

/** The control points of one piece. */
export function pieceOf({ points }: Curve, piece: number): Float64Array {
  return points.subarray(pointsOfPiece * piece, pointsOfPiece * (piece + 1));
}

/** A curve with all values multiplied by a factor, and an offset added to them. */
export function scaled(curve: Curve, factor: number, offset = 0): Curve {
  const { points } = curve;
  const moved = pointsLike(curve);
  for (let i = 0; i < points.length; i++) moved[i] = factor * points[i] + offset;
  return { ...curve, points: moved };
}

/** Whether a curve has one value all the time. */
export function isConstant({ points }: Curve): boolean {
  return points.every((point) => point === points[0]);
}

/** The piece that is under way at a time, or the last one: the later one where two meet. */
export function pieceAt({ times, pieces }: Curve, time: number): number {
  let [low, high] = [0, pieces - 1];
  while (low < high) {
    const middle = (low + high + 1) >> 1;
    if (times[middle] <= time) low = middle;
    else high = middle - 1;
  }
  return low;
}

/** No value of a piece is above this; not-a-number where the piece has one. */
export function upperBound({ points }: Curve, piece: number): number {
  const at = pointsOfPiece * piece;
  return Math.max(points[at], points[at + 1], points[at + 2], points[at + 3], points[at + 4], points[at + 5]);
}

/** No value of a piece is below this. */
export function lowerBound({ points }: Curve, piece: number): number {
  const at = pointsOfPiece * piece;
  return Math.min(points[at], points[at + 1], points[at + 2], points[at + 3], points[at + 4], points[at + 5]);
}

/** The value that a curve comes to a time with, before a jump there; at its very start the value that it starts with. */
export function valueBefore(curve: Curve, time: number): number {
  const piece = pieceAt(curve, time);
  const { times, points } = curve;
  if (times[piece] === time) return points[Math.max(0, pointsOfPiece * piece - 1)];
  return valueAt(pieceOf(curve, piece), (time - times[piece]) / (times[piece + 1] - times[piece]));
}
