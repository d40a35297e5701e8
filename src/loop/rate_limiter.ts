import type { Workshop } from './blocks/block.js';
import type { Node } from './graph.js';
import { jumpsAsModes } from './jumps_as_modes.js';
import type { Parts } from './parts.js';
import { isRunning } from './running.js';

/**
 * A plant signal that follows x no faster than a rate allows: y = x while |x'| ≤ s, and else y' = ±s toward x until they meet
 * again. A jump of x starts such a ramp from where y was before. At rest and in linear analysis y = x.
 * @param rate s > 0, in SI of the signal a second; the same both ways.
 */
export function rateLimited(
  name: string,
  input: Node,
  rate: () => Node,
  workshop: Workshop,
  parts: Parts,
): Node {
  const { graph, plain: a } = parts;
  const { addState, addMode, addCorrection, rateOf } = workshop;
  const [zero, one, minusOne] = [0, 1, -1].map((value) => graph.number(value));
  const x = jumpsAsModes(name, input, graph, workshop);
  const on = isRunning(`${name} slew`, parts);
  const ramp = addState(`${name} ramp`, () => graph.apply('choose', on, a.multiply(way, rate()), zero));
  const before = addMode(`${name} before a jump`, 'with_motion', () => x);
  const jumped = graph.apply('unequal', x, before);
  // 1 while y ramps up, −1 while it ramps down.
  const way: Node = addMode(`${name} slews`, 'at_jumps', () => graph.apply('choose', on, nextWay(), zero), 0);
  const follows = graph.apply('equal', way, zero);
  addCorrection(ramp, () => {
    const leaves = graph.apply('unequal', graph.apply('choose', on, nextWay(), zero), zero);
    return graph.apply('choose', follows, graph.apply('choose', leaves, before, ramp), ramp);
  });
  return graph.apply('choose', on, graph.apply('choose', follows, x, ramp), input);

  function nextWay(): Node {
    const speed = rateOf(x);
    const falls = graph.apply('less', speed, graph.apply('negate', rate()));
    const rises = graph.apply('less', rate(), speed);
    const leaving = graph.apply('choose', rises, one, graph.apply('choose', falls, minusOne, zero));
    const ahead = a.subtract(x, ramp);
    const met = graph.apply('less_or_equal', a.multiply(way, ahead), zero);
    const slowEnough = graph.apply('less_or_equal', a.multiply(way, speed), rate());
    const ramping = graph.apply('choose', met, graph.apply('choose', slowEnough, zero, way), way);
    return graph.apply(
      'choose',
      follows,
      graph.apply('choose', jumped, graph.apply('sign', a.subtract(x, before)), leaving),
      graph.apply('choose', jumped, graph.apply('sign', ahead), ramping),
    );
  }
}
