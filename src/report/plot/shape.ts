import { line } from 'd3-shape';

/** A point of a drawing, in px. */
export type Point = readonly [x: number, y: number];

/** Rounded to a tenth of a px: finer than a screen shows, and short. */
export function px(value: number): number {
  return Math.round(value * 10) / 10 + 0;
}

const drawLine = line<Point>()
  .defined(([x, y]) => Number.isFinite(x) && Number.isFinite(y))
  .digits(1);

/** The path through the points; it is broken where one is not finite. */
export function pathThrough(points: readonly Point[]): string {
  return drawLine(points) ?? '';
}

/**
 * Places of at most about `most` of so many entries, first and last always, so that long series stay small. Between
 * two places the entries of least and greatest `value` are kept, so that no peak is lost.
 */
export function thinned(values: readonly number[], most: number): number[] {
  const count = values.length;
  if (count <= most) return values.map((_, at) => at);
  const kept = new Set([0, count - 1]);
  const groups = Math.max(1, Math.floor(most / 2));
  for (let group = 0; group < groups; group++) {
    const from = Math.floor((group * count) / groups);
    const to = Math.floor(((group + 1) * count) / groups);
    let least = from;
    let greatest = from;
    for (let at = from; at < to; at++) {
      if (values[at] < values[least]) least = at;
      if (values[at] > values[greatest]) greatest = at;
    }
    kept.add(least).add(greatest);
  }
  return [...kept].sort((a, b) => a - b);
}

/** Length of the ticks that a fence line carries on its forbidden side, and the distance between them, px. */
const tick = 4;
const tickEvery = 9;

/** A fence line from one point to another with ticks on the side that `side` (a unit vector) points to. */
export function fencePath([x1, y1]: Point, [x2, y2]: Point, [sideX, sideY]: Point): string {
  const length = Math.hypot(x2 - x1, y2 - y1);
  const ticks = Math.min(200, Math.max(1, Math.floor(length / tickEvery)));
  const strokes = Array.from({ length: ticks }, (_, at) => {
    const share = (at + 0.5) / ticks;
    return `M${px(x1 + share * (x2 - x1))} ${px(y1 + share * (y2 - y1))}l${px(sideX * tick)} ${px(sideY * tick)}`;
  });
  return `M${px(x1)} ${px(y1)}L${px(x2)} ${px(y2)}${strokes.join('')}`;
}

/** A bracket between two heights at x: a line with a short cap at both ends. */
export function bracketPath(x: number, from: number, to: number): string {
  return `M${px(x - 4)} ${px(from)}h8m-4 0V${px(to)}m-4 0h8`;
}
