import { type Curve, endOf, pointsOfPiece, scaled } from './curve.js';
import { CurveBuilder, constantLike, earlier, largerOf } from './curve_arithmetic.js';
import { smallest } from './extremes.js';
import { allSections } from './sections.js';

/**
 * The largest value of y from t + from to t + to, for every t up to the end of the curve less `from`; a window that reaches
 * beyond the end of the curve ends there. It is the value at one end of the window or a maximum inside it, so that it is
 * exact.
 */
export function slidingLargest(curve: Curve, from: number, to: number): Curve {
  const end = endOf(curve) - from;
  const atEnds = largerOf(earlier(curve, from, end), earlier(curve, to, end));
  return largerOf(atEnds, maximaInside(curve, from, to, end));
}

/** As `slidingLargest`, for the smallest value. */
export function slidingSmallest(curve: Curve, from: number, to: number): Curve {
  return scaled(slidingLargest(scaled(curve, -1), from, to), -1);
}

interface Maximum {
  time: number;
  value: number;
}

/** The largest of the maxima within the window at every t; no larger than the curve itself where there is none. */
function maximaInside(curve: Curve, from: number, to: number, end: number): Curve {
  const floor = smallest(curve, curve.times[0], endOf(curve)).value;
  const maxima = maximaOf(curve);
  if (maxima.length === 0)
    return constantLike({ ...curve, times: Float64Array.of(0, end), pieces: 1 }, floor);
  const changes = [0, ...maxima.flatMap(({ time }) => [time - to, time - from])]
    .filter((time) => time >= 0 && time < end)
    .sort((a, b) => a - b);
  const builder = new CurveBuilder();
  // Maxima in the window, of which each later one is smaller: the first is the largest.
  const queue: Maximum[] = [];
  let next = 0;
  changes.forEach((start, i) => {
    const stop = changes[i + 1] ?? end;
    if (!(stop > start)) return;
    const middle = (start + stop) / 2;
    for (; next < maxima.length && maxima[next].time <= middle + to; next++) {
      while (queue.length > 0 && queue[queue.length - 1].value <= maxima[next].value) queue.pop();
      queue.push(maxima[next]);
    }
    while (queue.length > 0 && queue[0].time < middle + from) queue.shift();
    builder.add(start, new Float64Array(pointsOfPiece).fill(queue[0]?.value ?? floor));
  });
  return builder.build(end);
}

/** The local maxima of a curve, at jumps too, in order. */
function maximaOf(curve: Curve): Maximum[] {
  const maxima: Maximum[] = [];
  let last: Maximum | undefined;
  let rising = true;
  const meet = (time: number, value: number): void => {
    if (last && value < last.value) {
      if (rising) maxima.push(last);
      rising = false;
    } else if (last && value > last.value) rising = true;
    last = { time, value };
  };
  for (const section of allSections(curve, curve.times[0], endOf(curve))) {
    meet(section.from, section.first);
    meet(section.to, section.last);
  }
  if (last && rising) maxima.push(last);
  return maxima;
}
