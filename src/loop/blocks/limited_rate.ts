import type { TargetArithmetic } from '../arithmetic.js';
import type { Node } from '../graph.js';

/** A rate no larger than the slew in either direction, where there is one. */
export function limitedRate(rate: Node, slew: Node | undefined, a: TargetArithmetic): Node {
  return slew ? a.apply('limit', rate, a.apply('negate', slew), slew) : rate;
}
