import { type Curve, valueBefore } from './curve.js';
import type { Window } from './measure.js';
import { allSections } from './sections.js';

/** A place where a signal changes direction. */
export interface TurningPoint {
  kind: 'maximum' | 'minimum';
  time: number;
  value: number;
}

/**
 * The turning points of a curve inside a window, jumps included, in order: a change of direction counts when the signal
 * has moved back by more than `least` (SI, 0 for every change).
 */
export function turningPoints(curve: Curve, { from, until }: Window, least: number): TurningPoint[] {
  const found: TurningPoint[] = [];
  let low: { time: number; value: number } | undefined;
  let high: { time: number; value: number } | undefined;
  let direction = 0;
  const meet = (time: number, value: number): void => {
    if (!low || value < low.value) low = { time, value };
    if (!high || value > high.value) high = { time, value };
    if (direction >= 0 && high.value - value > least) {
      if (direction > 0) found.push({ kind: 'maximum', ...high });
      direction = -1;
      low = { time, value };
      high = low;
    } else if (direction <= 0 && value - low.value > least) {
      if (direction < 0) found.push({ kind: 'minimum', ...low });
      direction = 1;
      high = { time, value };
      low = high;
    }
  };
  meet(from, valueBefore(curve, from));
  for (const section of allSections(curve, from, until)) {
    meet(section.from, section.first);
    meet(section.to, section.last);
  }
  return found;
}
