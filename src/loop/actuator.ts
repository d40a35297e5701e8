import type { ActuatorDefinition } from '../spec/spec.js';
import { limited } from './expand_block.js';
import type { Node } from './graph.js';
import type { Parts } from './parts.js';
import type { PlantRoom } from './plant_room.js';
import { isRunning, running } from './running.js';

/** When a result takes effect that is ready `delay` s after the sampling instant: at once, or at the next start or middle. */
export function updateDelay(
  { update }: ActuatorDefinition,
  delay: Node,
  period: Node,
  { graph, plain }: Parts,
): Node {
  if (!update) return delay;
  const shift = graph.number(update === 'middle' ? 0.5 : 0);
  // A hair is taken off, so that rounding does not push a result that is just in time to the next period.
  const periods = plain.subtract(plain.subtract(plain.divide(delay, period), shift), graph.number(1e-9));
  return plain.multiply(
    plain.add(graph.apply('max', graph.apply('ceil', periods), graph.number(0)), shift),
    period,
  );
}

/** An actuator's value from the controller's result in SI: resolution, dead band, range, slew, effect. */
export function actuatorValue(
  actuator: ActuatorDefinition,
  result: Node,
  task: number,
  period: Node,
  plant: PlantRoom,
  parts: Parts,
): Node {
  const { graph, plain } = parts;
  let value = result;
  if (actuator.resolution) value = graph.apply('quantise', value, plant.lower(actuator.resolution));
  if (actuator.deadBand) {
    value = outside(value, plant.lower(actuator.deadBand), parts);
  }
  value = limited(value, actuator.range, plant.surroundings);
  if (actuator.slew) {
    const step = plain.multiply(plant.lower(actuator.slew), period);
    const last: Node = parts.addMemory(`${actuator.name} last output`, task, 0, () => kept);
    const slewed = graph.apply('limit', value, plain.subtract(last, step), plain.add(last, step));
    // At rest nothing changes, and a search for it must not be slowed down.
    const moving = isRunning(`${actuator.name} slew`, parts);
    const kept = graph.apply('choose', moving, slewed, value);
    value = kept;
  }
  return actuator.effect ? plain.multiply(plant.lower(actuator.effect), value) : value;
}

/**
 * What the plant feels of a held value: itself, or for `pwm: ripple` the high end of the range for its share of each period and
 * the low end for the rest, period after period from 0 on. At rest and in linear analysis its mean.
 */
export function feltValue(
  { name, range, pwm, effect }: ActuatorDefinition,
  held: Node,
  period: Node,
  plant: PlantRoom,
  parts: Parts,
): Node {
  if (pwm !== 'ripple' || !range) return held;
  const { graph, plain } = parts;
  const whole = (end: Node): Node => (effect ? plain.multiply(plant.lower(effect), end) : end);
  const [low, high] = [whole(plant.lower(range.low)), whole(plant.lower(range.high))];
  const [zero, one] = [graph.number(0), graph.number(1)];
  const rate = running(`${name} carrier rate`, (one) => 1 / one.of(period), parts);
  const carrier = parts.addState(`${name} carrier`, 0, () => rate);
  parts.addCorrection(carrier, () =>
    graph.apply('choose', graph.apply('less_or_equal', one, carrier), plain.subtract(carrier, one), carrier),
  );
  const share = plain.divide(plain.subtract(held, low), plain.subtract(high, low));
  const on = parts.addMode(`${name} is on`, 0, 'at_jumps', () => graph.apply('less', carrier, share));
  const switched = graph.apply('choose', on, high, low);
  return graph.apply('choose', graph.apply('unequal', rate, zero), switched, held);
}

/** Zero within a band around zero, and the distance from the band outside; each side has a slope of its own. */
function outside(value: Node, band: Node, { graph, plain }: Parts): Node {
  const below = graph.apply('less', value, graph.apply('negate', band));
  const lower = graph.apply('choose', below, plain.add(value, band), graph.number(0));
  return graph.apply('choose', graph.apply('less', band, value), plain.subtract(value, band), lower);
}
