import { sameDimension } from './dimension.js';
import type { Unit } from './spec.js';

/** Whether two units measure the same; an unknown unit is not held against anything. */
export function sameUnit(a: Unit | undefined, b: Unit | undefined): boolean {
  return a === undefined || b === undefined || sameDimension(a.dimension, b.dimension);
}
