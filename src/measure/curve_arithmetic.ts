import { differences, integralOf, partOf, signChanges } from './bernstein.js';
import { type Curve, pieceAt, pieceOf, pointsLike, pointsOfPiece, scaled } from './curve.js';

/** Collects pieces, one after another, to a curve. */
export class CurveBuilder {
  private readonly times: number[] = [];
  private readonly points: number[] = [];

  /** @param from s, where the piece before ended. */
  add(from: number, points: ArrayLike<number>): void {
    this.times.push(from);
    for (let i = 0; i < points.length; i++) this.points.push(points[i]);
  }

  /** @param end s, of the last piece. */
  build(end: number): Curve {
    return {
      times: Float64Array.from([...this.times, end]),
      points: Float64Array.from(this.points),
      pieces: this.times.length,
    };
  }
}

/** A curve over the time of another one that stays at a value. */
export function constantLike({ times, pieces }: Curve, value: number): Curve {
  return {
    times: Float64Array.of(times[0], times[pieces]),
    points: new Float64Array(pointsOfPiece).fill(value),
    pieces: 1,
  };
}

/** a + factor·b, over the time that both have. */
export function sumOf(a: Curve, b: Curve, factor: number): Curve {
  return combined(a, b, (builder, from, _to, p, q) => {
    builder.add(
      from,
      Array.from(p, (point, i) => point + factor * q[i]),
    );
  });
}

/** One curve less another, over the time that both have. */
export function difference(a: Curve, b: Curve): Curve {
  // Curves of one run have their times in common, and most have the same pieces.
  if (a.times !== b.times) return sumOf(a, b, -1);
  const points = pointsLike(a);
  for (let i = 0; i < points.length; i++) points[i] = a.points[i] - b.points[i];
  return { ...a, points };
}

/** The smaller of two curves at every time that both have. */
export function smallerOf(a: Curve, b: Curve): Curve {
  return scaled(largerOf(scaled(a, -1), scaled(b, -1)), -1);
}

/** The larger of two curves at every time that both have. */
export function largerOf(a: Curve, b: Curve): Curve {
  return combined(a, b, (builder, from, to, p, q) => {
    const gap = Array.from(p, (point, i) => point - q[i]);
    const places = [0, ...signChanges(gap), 1];
    for (let i = 1; i < places.length; i++) {
      const larger = integralOf(partOf(gap, places[i - 1], places[i])) < 0 ? q : p;
      builder.add(from + places[i - 1] * (to - from), partOf(larger, places[i - 1], places[i]));
    }
  });
}

type Combine = (
  builder: CurveBuilder,
  from: number,
  to: number,
  p: ArrayLike<number>,
  q: ArrayLike<number>,
) => void;

/** Walks two curves in steps in which each is one polynomial. */
function combined(a: Curve, b: Curve, combine: Combine): Curve {
  const builder = new CurveBuilder();
  const end = Math.min(a.times[a.pieces], b.times[b.pieces]);
  const same = a.times === b.times;
  for (let i = 0, j = 0, from = Math.max(a.times[0], b.times[0]); from < end; ) {
    const to = Math.min(a.times[i + 1], b.times[j + 1], end);
    if (to > from) {
      combine(
        builder,
        from,
        to,
        same ? pieceOf(a, i) : cut(a, i, from, to),
        same ? pieceOf(b, j) : cut(b, j, from, to),
      );
    }
    from = Math.max(from, to);
    if (a.times[i + 1] <= to) i++;
    if (b.times[j + 1] <= to) j++;
  }
  return builder.build(end);
}

function cut(curve: Curve, piece: number, from: number, to: number): ArrayLike<number> {
  const [t0, t1] = [curve.times[piece], curve.times[piece + 1]];
  const place = (time: number): number => (time >= t1 ? 1 : Math.max(0, (time - t0) / (t1 - t0)));
  return partOf(pieceOf(curve, piece), place(from), place(to));
}

/** The curve y(t + by) for t from 0 on, by ≥ 0, to `end` (s); after the curve's own end it stays at its last value. */
export function earlier(curve: Curve, by: number, end: number): Curve {
  const { times, pieces } = curve;
  const builder = new CurveBuilder();
  for (let piece = pieceAt(curve, by); piece < pieces && times[piece] - by < end; piece++) {
    const [from, to] = [Math.max(by, times[piece]), Math.min(times[piece + 1], end + by)];
    if (to > from) builder.add(from - by, cut(curve, piece, from, to));
  }
  const last = Math.max(0, times[pieces] - by);
  if (last < end)
    builder.add(last, new Float64Array(pointsOfPiece).fill(curve.points[curve.points.length - 1]));
  return builder.build(end);
}

/** The largest of y from the start of the curve to t, at every t. */
export function largestSoFar(curve: Curve): Curve {
  const builder = new CurveBuilder();
  let best = Number.NEGATIVE_INFINITY;
  for (let piece = 0; piece < curve.pieces; piece++) {
    const [t0, t1] = [curve.times[piece], curve.times[piece + 1]];
    const points = pieceOf(curve, piece);
    best = Math.max(best, points[0]);
    const turns = [0, ...signChanges(differences(points)), 1];
    for (let i = 1; i < turns.length; i++) {
      if (!(turns[i] > turns[i - 1])) continue;
      const part = partOf(points, turns[i - 1], turns[i]);
      const [from, to] = [turns[i - 1], turns[i]].map((place) => t0 + place * (t1 - t0));
      // A rise overtakes the best so far of this very moment, which an earlier top of the piece may have set.
      const level = best;
      const overtaken = part[0] < level ? signChanges(part.map((point) => point - level)) : [];
      const rises = part[part.length - 1] > level;
      const place = rises ? (overtaken[0] ?? 0) : 1;
      if (place > 0)
        builder.add(
          from,
          part.map(() => level),
        );
      if (place < 1) builder.add(from + place * (to - from), partOf(part, place, 1));
      best = Math.max(best, part[part.length - 1]);
    }
  }
  return builder.build(curve.times[curve.pieces]);
}
