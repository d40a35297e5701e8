import { type CompiledLoop, compileLoop } from '../kernel/compile.js';
import { movementOf } from '../kernel/movement.js';
import { runPlant, type TraceStore } from '../kernel/run_plant.js';
import { type ScenarioChange, type Timeline, timelineOf } from '../kernel/timeline.js';
import type { Run } from '../kernel/trace.js';
import type { PointOfRest } from '../linear/point_of_rest.js';
import { Evaluation } from '../loop/evaluate.js';
import { dependsOn, type Node } from '../loop/graph.js';
import { type Loop, LoopError } from '../loop/loop.js';
import { standardNormal } from '../loop/random_draws.js';
import type { Schedule } from '../loop/schedule.js';
import type { Scenario } from '../spec/spec.js';
import type { Curve } from './curve.js';
import { RecordedSignals } from './recorded_signals.js';
import type { ScenarioEvents } from './scenario_events.js';

/** Runs one scenario for plant after plant; what plants have in common is made once. */
export class ScenarioRun {
  readonly compiled: CompiledLoop;
  private readonly noises: Float64Array[] = [];
  private shared: { schedule: Schedule; timeline: Timeline } | undefined;
  private readonly recorded: RecordedSignals;
  /** States that start elsewhere than at rest. */
  private readonly startAt: { state: number; value: number }[];

  /** @param traced names of the signals to follow. */
  constructor(
    private readonly loop: Loop,
    readonly scenario: Scenario,
    private readonly events: ScenarioEvents,
    traced: readonly string[],
    private readonly seed: number,
    private readonly store: TraceStore,
  ) {
    this.recorded = new RecordedSignals(loop, traced);
    this.compiled = compileLoop(this.recorded.loop, this.recorded.names);
    this.startAt = scenario.startAt.map(({ name, value, place }) => {
      const state = loop.states.findIndex((one) => one.name === name);
      if (state >= 0) return { state, value };
      const known = loop.states.map((one) => `'${one.name}'`).join(', ');
      throw new LoopError(
        `'${name}' is no state, and so cannot start at a value; the states are ${known}`,
        place,
      );
    });
  }

  /** Follows one plant from its point of rest (or from zero, where the scenario says so). */
  run(parameters: Float64Array, rest: PointOfRest | undefined, schedule: Schedule, halvings: number): Run {
    const start = this.start(parameters, rest);
    const timeline = this.timeline(parameters, schedule);
    return runPlant({
      compiled: this.compiled,
      start,
      schedule,
      timeline,
      movement: movementOf(this.compiled, start, Math.max(...timeline.durations), halvings),
      noise: this.noise(schedule),
      signals: this.recorded.names.length,
      store: this.store,
    });
  }

  /** The curve of a followed signal in a run of this scenario. */
  curve(run: Run, name: string): Curve {
    return this.recorded.curve(run, name);
  }

  private timeline(parameters: Float64Array, schedule: Schedule): Timeline {
    if (this.shared?.schedule === schedule) return this.shared.timeline;
    const changes: ScenarioChange[] = this.events.changes(parameters);
    const timeline = timelineOf(schedule, changes, this.scenario.lasts, this.seed);
    if (this.events.sameForAllPlants) this.shared = { schedule, timeline };
    return timeline;
  }

  private noise(schedule: Schedule): Float64Array[] {
    this.loop.noises.forEach((task, source) => {
      const instants = Math.ceil((this.scenario.lasts * schedule.ticksPerSecond) / schedule.period[task]) + 1;
      if ((this.noises[source]?.length ?? 0) < instants) {
        this.noises[source] = standardNormal(this.seed, source, instants);
      }
    });
    return this.noises;
  }

  private start(parameters: Float64Array, rest: PointOfRest | undefined): Float64Array {
    const { layout } = this.compiled;
    const m = new Float64Array(layout.length);
    m.set(parameters, layout.parameter);
    m.set(this.loop.inputRest, layout.input);
    m.set(rest?.mode ?? this.loop.modes.map((mode) => mode.start), layout.mode);
    if (!rest && this.scenario.start === 'rest')
      m.set(
        this.loop.states.map(({ start }) => start),
        layout.state,
      );
    m.set(rest?.memory ?? this.loop.memories.map(({ start }) => start), layout.memory);
    if (rest) {
      m.set(rest.state, layout.state);
      m.set(rest.held, layout.held);
    }
    for (const { state, value } of this.startAt) m[layout.state + state] = value;
    const states = m.slice(layout.state, layout.state + this.loop.states.length);
    const evaluation = new Evaluation(
      { parameter: parameters, input: this.loop.inputRest, ...rest, state: states },
      'off',
    );
    this.loop.readings.forEach(({ sampled }, i) => {
      m[layout.reading + i] = evaluation.of(sampled);
    });
    this.latestAtStart(m);
    return m;
  }

  /** Sampled signals have a value before their task computes for the first time: the one at rest. */
  private latestAtStart(m: Float64Array): void {
    const { layout } = this.compiled;
    const part = (from: number, length: number): Float64Array => m.subarray(from, from + length);
    const evaluation = new Evaluation(
      {
        parameter: part(layout.parameter, this.loop.parameters.length),
        input: part(layout.input, this.loop.inputs.length),
        held: part(layout.held, this.loop.held.length),
        memory: part(layout.memory, this.loop.memories.length),
        reading: part(layout.reading, this.loop.readings.length),
      },
      'off',
    );
    this.recorded.names
      .map((name) => this.recorded.loop.signals.get(name)!)
      .filter(({ kind }) => kind === 'sampled')
      .forEach(({ value }, i) => {
        m[layout.latest + i] = evaluation.of(value);
      });
  }
}

/** Whether a schedule is the same for every plant. */
export function timingIsCommon(loop: Loop): boolean {
  const nodes: Node[] = [
    ...loop.tasks.flatMap(({ period, phase, jitter }) => [period, phase, jitter]),
    ...loop.channels.map(({ delay }) => delay),
  ];
  return nodes.every((node) => !dependsOn(node, ['parameter']));
}
