import { integralOf, partOf, signChanges } from './bernstein.js';
import type { Curve } from './curve.js';
import { type Part, sizeParts } from './integrals.js';
import type { Window } from './measure.js';

/**
 * The largest mean of |y| over any stretch of a given length (s) inside a window. The mean is largest where the value that
 * enters equals the one that leaves, or at an end of a piece; all such places are looked at, so that it is exact.
 */
export function largestMeanOfSize(curve: Curve, length: number, window: Window): number {
  const parts = [...sizeParts(curve, window)];
  const areas = new Areas(parts);
  const last = window.until - length;
  const starts = [
    ...new Set(
      [window.from, last, ...parts.flatMap(({ from }) => [from, from - length])].filter(
        (time) => time >= window.from && time <= last,
      ),
    ),
  ].sort((a, b) => a - b);
  let most = Number.NEGATIVE_INFINITY;
  const look = (start: number): void => {
    const mean = (areas.upTo(start + length) - areas.upTo(start)) / length;
    if (!(mean <= most)) most = mean;
  };
  for (const start of starts) look(start);
  for (let i = 1; i < starts.length; i++) {
    for (const start of balances(areas, starts[i - 1], starts[i], length)) look(start);
  }
  return most;
}

/** Starts between two neighbouring ones at which as much enters as leaves. */
function balances(areas: Areas, from: number, to: number, length: number): number[] {
  const leaving = areas.between(from, to);
  const entering = areas.between(from + length, to + length);
  const gain = Array.from(entering, (point, i) => point - leaving[i]);
  return signChanges(gain).map((place) => from + place * (to - from));
}

/** The area under parts that follow each other. */
class Areas {
  private readonly before: number[] = [];

  constructor(private readonly parts: readonly Part[]) {
    let sum = 0;
    for (const { from, to, points } of parts) {
      this.before.push(sum);
      sum += (to - from) * integralOf(points);
    }
  }

  upTo(time: number): number {
    const index = this.indexAt(time);
    const { from, to, points } = this.parts[index];
    if (time <= from) return this.before[index];
    const share = Math.min(1, (time - from) / (to - from));
    return this.before[index] + share * (to - from) * integralOf(partOf(points, 0, share));
  }

  /** Control points between two times that lie in one part. */
  between(from: number, to: number): number[] {
    const part = this.parts[this.indexAt((from + to) / 2)];
    const place = (time: number): number =>
      Math.min(1, Math.max(0, (time - part.from) / (part.to - part.from)));
    const [a, b] = [place(from), place(to)];
    return b > a ? partOf(part.points, a, b) : Array.from(part.points, () => part.points[0]);
  }

  private indexAt(time: number): number {
    let [low, high] = [0, this.parts.length - 1];
    while (low < high) {
      const middle = (low + high + 1) >> 1;
      if (this.parts[middle].from <= time) low = middle;
      else high = middle - 1;
    }
    return low;
  }
}
