import { edgeOf } from '../linear/edge.js';
import { Linearisation, withReadings } from '../linear/linearise.js';
import { NoisePath } from '../linear/noise_path.js';
import { openedLoop } from '../linear/opened_loop.js';
import type { PointOfRest } from '../linear/point_of_rest.js';
import type { StateEquations } from '../linear/state_equations.js';
import { Evaluation, type LeafValues } from '../loop/evaluate.js';
import { expandLoop } from '../loop/expand.js';
import { LoopError } from '../loop/loop.js';
import type { CoefficientValues } from '../loop/parts.js';
import type { Schedule } from '../loop/schedule.js';
import { openedAt } from '../spec/opened_at.js';
import type { Requirement, Spec } from '../spec/spec.js';
import { LoopView } from './loop_view.js';
import { OpenedSizes } from './opened_sizes.js';

/** The opened loop of one plant, or why it cannot be formed. */
export type LoopViewResult = { kind: 'loop'; loop: LoopView } | { kind: 'unformed'; why: string };

/** The loop opened at one signal or at several at once, and linearised at one point, for plant after plant. */
export class LoopPoint {
  readonly linearisation: Linearisation;
  /** The leaves that `around` sets, SI. */
  readonly overrides: { group: 'state' | 'input' | 'held'; index: number; value: number }[];

  private readonly sizes: OpenedSizes;
  /** Where the requirement asks for what noise drives. */
  private readonly noise: { path: NoisePath; scale: number } | undefined;

  constructor(spec: Spec, coefficients: CoefficientValues, requirement: Requirement) {
    const { signals, around, place } = requirement;
    const openAt = openingsOf(spec, requirement);
    const loop = expandLoop(spec, coefficients, { openAt });
    this.linearisation = new Linearisation(loop);
    this.sizes = new OpenedSizes(spec, loop);
    this.overrides = around.map(({ name, value, place }) => ({ ...this.leafNamed(name, place), value }));
    this.noise = signals.of === undefined ? undefined : this.noisePath(spec, openAt[0], signals.of, place);
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
    const found = this.sizes.at(new Evaluation(leaves, 'off'));
    if (found.kind === 'unformed') return found;
    const equations = openedLoop(this.linearisation, schedule, leaves, found.sizes);
    if (!noise && isNothing(equations)) {
      const signals = this.linearisation.loop.openings.map(({ at }) => `'${at}'`).join(' and ');
      return {
        kind: 'unformed',
        why: `nothing of what goes out at ${signals} returns: the loop is open at the point of linearisation, as inside a dead band or with a gain of 0; where it closes elsewhere, say so with \`around\``,
      };
    }
    const periods = this.linearisation.loop.openings.map(
      ({ task }) => equations.period! / (schedule.cycle / schedule.period[task]),
    );
    return { kind: 'loop', loop: new LoopView(equations, noiseGain, periods) };
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
    // Injected values stand at what the signals are at rest, so that the point is the closed loop's own. One that is computed
    // from another is known a round after it, and no chain of them is longer than their number.
    let leaves = withReadings(loop, { parameter: parameters, memory: rest.memory, ...point });
    for (let round = 0; round < loop.openings.length; round++) {
      const evaluation = new Evaluation(leaves, 'off');
      const injected = loop.openings.map(({ returned }) => evaluation.of(returned));
      leaves = withReadings(loop, { ...leaves, injected });
    }
    return leaves;
  }

  private edge(leaves: LeafValues): string | undefined {
    const evaluation = new Evaluation(leaves, 'off');
    const { loop } = this.linearisation;
    const named = [
      ...loop.states.map(({ name, derivative }) => ({ name, node: derivative })),
      ...loop.readings.map(({ sensor, sampled }) => ({ name: sensor, node: sampled })),
      ...loop.memories.map(({ name, next }) => ({ name, node: next })),
      ...loop.held.map(({ name, value }) => ({ name, node: value })),
      ...loop.openings.map(({ at, returned }) => ({ name: at, node: returned })),
    ];
    for (const { name, node } of named) {
      const edge = edgeOf(node, evaluation);
      if (edge) return `at the point of linearisation '${name}' is at ${edge}`;
    }
    return undefined;
  }
}

/** Where a requirement opens the loop, in an order that does not depend on how it is written. */
export function openingsOf(spec: Spec, requirement: Requirement): string[] {
  return openedAt(requirement)
    .map((name) => sensorFedBy(spec, name) ?? name)
    .sort();
}

/** A transfer of nothing at all: margins of it would be infinite, and would pass. */
function isNothing({ a, d }: StateEquations): boolean {
  return a.rows === 0 && d.data.every((entry) => entry === 0);
}

/** A continuous signal that feeds exactly one sensor means that sensor. */
function sensorFedBy(spec: Spec, name: string): string | undefined {
  if (!spec.plant.some((signal) => signal.name === name)) return undefined;
  const fed = spec.sensors.filter(({ of }) => of.kind === 'name' && of.name === name);
  return fed.length === 1 ? fed[0].name : undefined;
}
