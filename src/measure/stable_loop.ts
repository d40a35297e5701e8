import type { LoopView } from './loop_view.js';
import { type MeasureResult, measured } from './measure.js';

/** A margin of a stable loop, or `none` (no margin at all) with a note where the closed loop is unstable. */
export function ofStableLoop(loop: LoopView, none: number, margin: () => MeasureResult): MeasureResult {
  return loop.stable ? margin() : measured(none, 'the closed loop is unstable');
}
