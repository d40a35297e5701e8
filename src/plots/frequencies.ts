import type { LoopView } from '../measure/loop_view.js';

const points = 320;
/** The picture reaches so far below the lowest frequency that matters and above the highest. */
const below = 30;
const above = 8;
/** An end of a limit's band stands in the picture with so much on both sides. */
const besideEnd = 3;
/** A phase crossing at which the gain is so far from one, as a factor, tells nothing. */
const farthestFactor = 100;
/** Without a frequency that matters it covers so much of the range up to half the sampling frequency. */
const coveredWithout = 1e4;

/** Frequencies in rad/s at which margins of a loop are read; none of a loop whose signal changes several times in a cycle. */
export function crossingsOf(view: LoopView): number[] {
  if (view.changes > 1) return [];
  const { gainCrossings, phaseCrossings } = view.margins();
  return [
    ...gainCrossings,
    ...phaseCrossings.filter(({ factor }) => Math.max(factor, 1 / factor) < farthestFactor),
  ].map(({ frequency }) => frequency);
}

/**
 * Frequencies of a picture in rad/s: evenly spread over the logarithm about those that matter, which stand among them so that
 * nothing lies between two.
 * @param end half the sampling frequency.
 * @param ends of the bands of limits; the picture reaches a little beyond each.
 */
export function frequenciesAbout(
  mattering: readonly number[],
  end: number,
  ends: readonly number[] = [],
): number[] {
  const isInside = (frequency: number): boolean => frequency > end / 1e7 && frequency <= end;
  const [inside, edges] = [mattering.filter(isInside), ends.filter(isInside)];
  const wanted = [...inside.map((one) => above * one), ...edges.map((one) => besideEnd * one)];
  const highest = wanted.length > 0 ? Math.min(end, Math.max(...wanted)) : end;
  const lowest = Math.min(
    end / coveredWithout,
    ...inside.map((one) => one / below),
    ...edges.map((one) => one / besideEnd),
  );
  const ratio = highest / lowest;
  const even = Array.from({ length: points }, (_, at) => lowest * ratio ** (at / (points - 1)));
  return [...new Set([...even.slice(0, -1), ...inside, ...edges, highest])].sort((a, b) => a - b);
}
