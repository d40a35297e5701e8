import type { LoopMargins } from '../linear/margins.js';
import { type MeasureResult, measured } from './measure.js';

/** A margin of a stable loop, or `none` (no margin at all) with a note where the closed loop is unstable. */
export function ofStableLoop(margins: LoopMargins, none: number, margin: () => MeasureResult): MeasureResult {
  return margins.stable ? margin() : measured(none, 'the closed loop is unstable');
}
