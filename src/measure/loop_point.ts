import { edgeOf } from '../linear/edge.js';
import { Linearisation, withReadings } from '../linear/linearise.js';
import { NoisePath } from '../linear/noise_path.js';
import { openedLoop } from '../linear/opened_loop.js';
import type { PointOfRest } from '../linear/point_of_rest.js';
import { Evaluation, type LeafValues } from '../loop/evaluate.js';
import { expandLoop } from '../loop/expand.js';
import { LoopError } from '../loop/loop.js';
import type { CoefficientValues } from '../loop/parts.js';
import type { Schedule } from '../loop/schedule.js';
import type { Requirement, Spec } from '../spec/spec.js';
import { LoopView } from './loop_view.js';

/** The opened loop of one plant, or why it cannot be formed. */
export type LoopViewResult = { kind: 'loop'; loop: LoopView } | { kind: 'unformed'; why: string };

/** The loop opened at one signal and linearised at one point, for plant after plant. */
export class LoopPoint {
  readonly linearisation: Linearisation;
  /** The leaves that `around` sets, SI. */
  readonly overrides: { group: 'state' | 'input' | 'held'; index: number; value: number }[];

  /** Where the requirement asks for what noise drives. */
  private readonly noise: { path: NoisePath; scale: number } | undefined;

  constructor(spec: Spec, coefficients: CoefficientValues, { signals, around, place }: Requirement) {
    const at = sensorFedBy(spec, signals.at) ?? signals.at;
    this.linearisation = new Linearisation(expandLoop(spec, coefficients, { openAt: at }));
    this.overrides = around.map(({ name, value, place }) => ({ ...this.leafNamed(name, place), value }));
    this.noise = signals.of === undefined ? undefined : this.noisePath(spec, at, signals.of, place);
  }

  private noisePath(spec: Spec, at: string, of: string, place: Requirement['place']): LoopPoint['noise'] {
    const sensor = spec.sensors.find(({ name }) => name === at);
    const actuators = spec.actuators.map(({ name }) => name);
    if (!sensor || !actuators.includes(of)) {
      throw new LoopError(
        `noise goes from a sensor (\`at: ${at}\`) to an actuator (\`of: ${of}\`); expected one of the sensors ${spec.sensors.map(({ name }) => name).join(', ')} and one of the actuators ${actuators.join(', ')}`,
        place,
      );
    }
    const { loop } = this.linearisation;
    const held = loop.held.findIndex(({ name }) => name === of);
    return { path: new NoisePath(loop, held), scale: sensor.unit.scale };
  }

  private leafNamed(
    name: string,
    place: Requirement['place'],
  ): { group: 'state' | 'input' | 'held'; index: number } {
    const { loop } = this.linearisation;
    const found = [
      { group: 'state' as const, index: loop.states.findIndex((state) => state.name === name) },
      { group: 'input' as const, index: loop.inputs.indexOf(name) },
      { group: 'held' as const, index: loop.held.findIndex((held) => held.name === name) },
    ].find(({ index }) => index >= 0);
    if (found) return found;
    const states = loop.states.map((state) => `'${state.name}'`).join(', ');
    throw new LoopError(
      `the loop cannot be linearised around '${name}', which follows from other signals; expected a state of the plant (${states}), an input or an actuator`,
      place,
    );
  }

  /** @param rest the closed loop's point of rest. */
  view(parameters: Float64Array, rest: PointOfRest, schedule: Schedule): LoopViewResult {
    const leaves = this.leaves(parameters, rest);
    const why = this.edge(leaves);
    if (why) return { kind: 'unformed', why };
    const { noise } = this;
    const noiseGain = noise && (() => noise.path.gain(schedule, leaves) / noise.scale);
    const equations = openedLoop(this.linearisation, schedule, leaves);
    return { kind: 'loop', loop: new LoopView(equations, noiseGain) };
  }

  private leaves(parameters: Float64Array, rest: PointOfRest): LeafValues {
    const { loop } = this.linearisation;
    const point = {
      state: [...rest.state],
      input: [...loop.inputRest],
      held: [...rest.held],
      mode: rest.mode,
    };
    for (const { group, index, value } of this.overrides) point[group][index] = value;
    // The injected value stands at what the signal is at rest, so that the point is the closed loop's own.
    const closed = withReadings(loop, { parameter: parameters, memory: rest.memory, ...point });
    const injected = [new Evaluation(closed, 'off').of(loop.opening!.returned)];
    return withReadings(loop, { ...closed, injected });
  }

  private edge(leaves: LeafValues): string | undefined {
    const evaluation = new Evaluation(leaves, 'off');
    const { loop } = this.linearisation;
    const named = [
      ...loop.states.map(({ name, derivative }) => ({ name, node: derivative })),
      ...loop.readings.map(({ sensor, sampled }) => ({ name: sensor, node: sampled })),
      ...loop.memories.map(({ name, next }) => ({ name, node: next })),
      ...loop.held.map(({ name, value }) => ({ name, node: value })),
      { name: loop.opening!.at, node: loop.opening!.returned },
    ];
    for (const { name, node } of named) {
      const edge = edgeOf(node, evaluation);
      if (edge) return `at the point of linearisation '${name}' is at ${edge}`;
    }
    return undefined;
  }
}

/** A continuous signal that feeds exactly one sensor means that sensor. */
function sensorFedBy(spec: Spec, name: string): string | undefined {
  if (!spec.plant.some((signal) => signal.name === name)) return undefined;
  const fed = spec.sensors.filter(({ of }) => of.kind === 'name' && of.name === name);
  return fed.length === 1 ? fed[0].name : undefined;
}
