import type { ControllerDefinition, Range, Spec } from '../spec/spec.js';
import type { ControllerRoom } from './controller_room.js';
import type { Node } from './graph.js';
import type { Loop, SignalRange, TracedSignal } from './loop.js';
import { lower, type Surroundings } from './lower.js';
import type { Parts } from './parts.js';
import type { PlantRoom } from './plant_room.js';

/** Every name that a requirement may follow over time, in SI. */
export function tracedSignals(
  spec: Spec,
  controllers: readonly ControllerDefinition[],
  parts: Parts,
  plant: PlantRoom,
  room: ControllerRoom,
): Loop['signals'] {
  const { graph } = parts;
  const inSI = (value: Node, scale: number): Node =>
    scale === 1 ? value : graph.apply('multiply', value, graph.number(scale));
  const rangeOf = (
    range: Range | undefined,
    around: Surroundings,
    scale: number,
    step?: Node,
  ): SignalRange | undefined =>
    range && {
      low: inSI(lower(range.low, around), scale),
      high: inSI(lower(range.high, around), scale),
      resolution: step ?? graph.number(0),
    };
  const inputs = spec.inputs.map(({ name }): [string, TracedSignal] => [
    name,
    { kind: 'continuous', value: plant.outer('input', name), range: undefined },
  ]);
  const plantSignals = spec.plant.map(({ name, range }): [string, TracedSignal] => [
    name,
    { kind: 'continuous', value: plant.signal(name), range: rangeOf(range, plant.surroundings, 1) },
  ]);
  const actuators = spec.actuators.map(({ name, range, resolution }): [string, TracedSignal] => {
    const held = graph.leaf(
      'held',
      parts.held.findIndex((one) => one.name === name),
    );
    const step = resolution && plant.lower(resolution);
    return [name, { kind: 'continuous', value: held, range: rangeOf(range, plant.surroundings, 1, step) }];
  });
  const sensors = spec.sensors.flatMap(({ name, unit, range, quantum }): [string, TracedSignal][] => {
    const index = parts.readings.findIndex((reading) => reading.sensor === name);
    if (index < 0) return [];
    const value = inSI(graph.leaf('reading', index), unit.scale);
    const step = quantum && plant.lower(quantum);
    const { task } = parts.readings[index];
    return [[name, { kind: 'sampled', task, value, range: rangeOf(range, plant.surroundings, 1, step) }]];
  });
  const controllerSignals = controllers.flatMap(({ signals }, task) =>
    signals.map(({ name, unit, range }): [string, TracedSignal] => {
      const value = inSI(room.signal(name), unit.scale);
      return [
        name,
        { kind: 'sampled', task, value, range: rangeOf(range, room.surroundings(task), unit.scale) },
      ];
    }),
  );
  return new Map([...inputs, ...plantSignals, ...actuators, ...sensors, ...controllerSignals]);
}
