import type { SensorDefinition } from '../spec/spec.js';
import { limited } from './expand_block.js';
import type { Node } from './graph.js';
import type { Parts } from './parts.js';
import type { PlantRoom } from './plant_room.js';
import { normalQuantile } from './random_draws.js';

/** A sensor's continuous value: gain, offset, drift, filter and dead time, before it is sampled; SI. */
export function measuredValue(sensor: SensorDefinition, plant: PlantRoom, parts: Parts): Node {
  const { plain } = parts;
  let value = plant.lower(sensor.of);
  if (sensor.gain) value = plain.multiply(plant.lower(sensor.gain), value);
  if (sensor.offset) value = plain.add(value, plant.lower(sensor.offset));
  if (sensor.drift) value = plain.add(value, drifted(sensor.name, plant.lower(sensor.drift), parts));
  if (sensor.filter) value = filtered(sensor.name, value, plant.lower(sensor.filter), parts);
  return sensor.deadTime ? plant.delayed(value, plant.lower(sensor.deadTime), sensor.place) : value;
}

/** Nothing at rest; from the start of a scenario on it grows. */
function drifted(name: string, rate: Node, parts: Parts): Node {
  const running = parts.addInput(`${name} drift rate`, 0);
  parts.program.push({
    kind: 'input',
    index: running.index,
    how: 'set',
    common: false,
    changes: (plant) => [{ time: 0, value: plant.of(rate) }],
  });
  return parts.addState(`${name} drift`, 0, () => running);
}

function filtered(name: string, source: Node, timeConstant: Node, parts: Parts): Node {
  const { plain } = parts;
  const state: Node = parts.addState(`${name} filter`, 0, () =>
    plain.divide(plain.subtract(source, state), timeConstant),
  );
  return state;
}

/**
 * What a task reads: the measured value with noise, range and quantum, unless the sample is lost or the sensor stuck; SI.
 * @param period of the task, s.
 */
export function sampledValue(
  sensor: SensorDefinition,
  task: number,
  period: Node,
  plant: PlantRoom,
  parts: Parts,
): Node {
  const { graph, plain } = parts;
  let value = plant.measured(sensor);
  if (sensor.noise)
    value = plain.add(value, noiseOf(sensor, plant.lower(sensor.noise), task, period, plant, parts));
  value = limited(value, sensor.range, plant.surroundings);
  if (sensor.quantum) value = graph.apply('quantise', value, plant.lower(sensor.quantum));
  return withFaults(sensor, value, task, plant, parts);
}

/** White noise, or noise with a corner as an exactly sampled first-order process of the same deviation. */
function noiseOf(
  { name, noiseCorner }: SensorDefinition,
  deviation: Node,
  task: number,
  period: Node,
  plant: PlantRoom,
  parts: Parts,
): Node {
  const { graph, plain } = parts;
  const draw = parts.addNoise(task);
  if (!noiseCorner) return plain.multiply(deviation, draw);
  const kept = graph.apply('exp', graph.apply('negate', plain.multiply(plant.lower(noiseCorner), period)));
  const fresh = graph.apply('sqrt', plain.subtract(graph.number(1), plain.multiply(kept, kept)));
  const next = (): Node => plain.add(plain.multiply(kept, last), plain.multiply(fresh, draw));
  const last: Node = parts.addMemory(`${name} noise`, task, 0, next);
  return plain.multiply(deviation, next());
}

/** The reading stays as it was while a sample is lost or the sensor is stuck. */
function withFaults(
  { name, drops, stuck }: SensorDefinition,
  value: Node,
  task: number,
  plant: PlantRoom,
  parts: Parts,
): Node {
  const { graph } = parts;
  const conditions: Node[] = [];
  if (drops) conditions.push(graph.apply('less', parts.addNoise(task), graph.number(normalQuantile(drops))));
  if (stuck) conditions.push(windowOf(name, plant.lower(stuck.from), plant.lower(stuck.to), parts));
  if (conditions.length === 0) return value;
  const last: Node = parts.addMemory(`${name} last reading`, task, 0, () => read);
  const read = conditions.reduce((kept, condition) => graph.apply('choose', condition, last, kept), value);
  return read;
}

/** One between two times of a scenario, zero else. */
function windowOf(name: string, from: Node, to: Node, parts: Parts): Node {
  const window = parts.addInput(`${name} stuck`, 0);
  parts.program.push({
    kind: 'input',
    index: window.index,
    how: 'set',
    common: false,
    changes: (plant) => [
      { time: plant.of(from), value: 1 },
      { time: plant.of(to), value: 0 },
    ],
  });
  return window;
}
