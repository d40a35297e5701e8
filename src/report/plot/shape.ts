import { line } from 'd3-shape';

/** A point of a drawing, in px. */
export type Point = readonly [x: number, y: number];

/** Rounded to a tenth of a px: finer than a screen shows, and short. */
export function px(value: number): number {
  return Math.round(value * 10) / 10 + 0;
}

const drawLine = line<Point>().digits(1);
/** A path may miss its points by so much, px: less than a screen shows. */
const tolerance = 0.12;

/** The path through the points; it is broken where one is not finite. */
export function pathThrough(points: readonly Point[]): string {
  return finiteRuns(points)
    .map((run) => drawLine(simplified(run)) ?? '')
    .join('');
}

/** The closed path between two rows of points that stand one above another; it is broken where one is not finite. */
export function bandBetween(upper: readonly Point[], lower: readonly Point[]): string {
  const both = upper.map((point, at) => [point, lower[at]] as const);
  const isThere = ([one, other]: readonly [Point, Point]): boolean =>
    [...one, ...other].every(Number.isFinite);
  return runsOf(both, isThere)
    .map((run) => {
      const above = simplified(run.map(([one]) => one));
      const below = simplified(run.map(([, other]) => other)).reverse();
      return `${drawLine([...above, ...below]) ?? ''}Z`;
    })
    .join('');
}

function finiteRuns(points: readonly Point[]): Point[][] {
  return runsOf(points, (point) => point.every(Number.isFinite));
}

/** The stretches of a row in which all are so. */
function runsOf<T>(row: readonly T[], isSo: (one: T) => boolean): T[][] {
  const runs: T[][] = [];
  row.forEach((one, at) => {
    if (!isSo(one)) return;
    if (at === 0 || !isSo(row[at - 1])) runs.push([]);
    runs[runs.length - 1].push(one);
  });
  return runs;
}

/**
 * The fewest of the points, first and last among them, from whose lines the others are no farther than the tolerance (Ramer,
 * 1972; Douglas and Peucker, 1973).
 */
export function simplified(points: readonly Point[]): Point[] {
  const kept = new Set([0, points.length - 1]);
  const open: [number, number][] = [[0, points.length - 1]];
  for (let range = open.pop(); range; range = open.pop()) {
    const [from, to] = range;
    let farthest = { at: from, distance: tolerance };
    for (let at = from + 1; at < to; at++) {
      const distance = distanceTo(points[at], points[from], points[to]);
      if (distance > farthest.distance) farthest = { at, distance };
    }
    if (farthest.at === from) continue;
    kept.add(farthest.at);
    open.push([from, farthest.at], [farthest.at, to]);
  }
  return points.filter((_, at) => kept.has(at));
}

/** From a point to the stretch between two others. */
function distanceTo([x, y]: Point, [x1, y1]: Point, [x2, y2]: Point): number {
  const [dx, dy] = [x2 - x1, y2 - y1];
  const square = dx * dx + dy * dy;
  const share = square > 0 ? Math.min(1, Math.max(0, ((x - x1) * dx + (y - y1) * dy) / square)) : 0;
  return Math.hypot(x - x1 - share * dx, y - y1 - share * dy);
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
