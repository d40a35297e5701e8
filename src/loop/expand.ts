import { openedAt } from '../spec/opened_at.js';
import type { Scenario, Spec } from '../spec/spec.js';
import { ControllerRoom } from './controller_room.js';
import { countersOf } from './counters.js';
import { Cut } from './cut.js';
import type { Loop } from './loop.js';
import { orderTasks } from './order_tasks.js';
import { type CoefficientValues, Parts } from './parts.js';
import { PlantRoom } from './plant_room.js';
import { tracedSignals } from './traced_signals.js';

/**
 * Expands a spec with its coefficients into the loop's equations. With `openAt` every consumer of each of those sensor,
 * controller or actuator signals sees an injected value of its own instead.
 * The equations of a `scenario` have what its inputs do; without one all inputs are constant.
 * @throws {LoopError} where the build's numbers do not fit the spec, or the loop cannot be opened there.
 */
export function expandLoop(
  spec: Spec,
  coefficients: CoefficientValues,
  { openAt = [], scenario }: { openAt?: readonly string[]; scenario?: Scenario } = {},
): Loop {
  const parts = new Parts(spec.inputs, coefficients);
  const controllers = orderTasks(spec);
  const plant = new PlantRoom(spec, parts, scenario);
  const cut = new Cut(parts.graph, controllers, openAt);
  const room = new ControllerRoom(spec, controllers, parts, plant, cut);
  for (const actuator of spec.actuators) room.addActuator(actuator);
  for (const { name } of spec.plant) plant.signal(name);
  for (const { name } of controllers.flatMap(({ signals }) => signals)) room.signal(name);
  parts.finish();
  const signals = tracedSignals(spec, controllers, parts, plant, room);
  const counted = countersOf(controllers, parts, room);
  const asked = spec.requirements.find((requirement) => {
    const names = openedAt(requirement);
    return openAt.every((name) => names.includes(name));
  });
  return {
    graph: parts.graph,
    parameters: spec.parameters.map(({ name }) => name),
    inputs: parts.inputs.map(({ name }) => name),
    inputRest: parts.inputs.map(({ rest }) => rest),
    states: parts.states,
    modes: parts.modes,
    corrections: parts.corrections,
    program: plant.inputs.finished(parts.delayedSources),
    memories: parts.memories,
    counters: counted.counters,
    readings: parts.readings,
    held: parts.held,
    channels: parts.channels,
    tasks: controllers.map(({ name, place, every, phase, jitter }) => ({
      name,
      place,
      period: plant.lower(every),
      phase: phase ? plant.lower(phase) : parts.graph.number(0),
      jitter: jitter ? plant.lower(jitter) : parts.graph.number(0),
    })),
    noises: parts.noises,
    signals: new Map([...signals, ...counted.signals]),
    openings: cut.openings(asked?.place ?? controllers[0].place),
  };
}
