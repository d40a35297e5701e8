import type { LoopView } from './loop_view.js';
import { type MeasureResult, measured, unformed } from './measure.js';

/** A margin of a stable loop, or `none` (no margin at all) with a note where the closed loop is unstable. */
export function ofStableLoop(loop: LoopView, none: number, margin: () => MeasureResult): MeasureResult {
  return loop.stable ? margin() : measured(none, 'the closed loop is unstable');
}

/** A result that has no meaning where the signal changes several times in a cycle of all controllers. */
export function ofSingleRate(loop: LoopView, result: () => MeasureResult): MeasureResult {
  if (loop.changes === 1) return result();
  if (loop.periods.length > 1) {
    return unformed(
      `the loop is opened at ${loop.periods.length} signals at once, so that it has no one response over frequency; open it at one of them`,
    );
  }
  return unformed(
    `the signal changes ${loop.changes} times in a cycle of all controllers, so that the loop has no one response over frequency; open it at a signal of the slowest controller`,
  );
}
