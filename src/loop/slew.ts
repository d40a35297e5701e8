import type { Workshop } from './blocks/block.js';
import type { Node } from './graph.js';
import type { Parts } from './parts.js';
import { isRunning } from './running.js';

/**
 * A controller's signal that changes by no more than a rate allows: y = x, but not below y₁ − s·T and not above y₁ + s·T.
 * At rest nothing changes, and y = x there: a search for it must not crawl by steps of s·T.
 * @param rate s, in the signal's unit a second; the same both ways.
 * @param bounded keeps the result in the signal's range, which may have moved since the last instant.
 */
export function slewed(
  name: string,
  value: Node,
  rate: Node,
  bounded: (node: Node) => Node,
  { arithmetic, addMemory, period }: Workshop,
  parts: Parts,
): Node {
  const last: Node = addMemory(`${name} last output`, () => output);
  const most = arithmetic.multiply(rate, period());
  const [low, high] = [arithmetic.subtract(last, most), arithmetic.add(last, most)];
  // Not as a range, whose hits are counted.
  const lower = arithmetic.apply('choose', arithmetic.apply('less', value, low), low, value);
  const moved = arithmetic.apply('choose', arithmetic.apply('less', high, value), high, lower);
  const output = bounded(arithmetic.apply('choose', isRunning(`${name} slew`, parts), moved, value));
  return output;
}
