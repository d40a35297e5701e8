import type { Schedule } from '../loop/schedule.js';
import { queueLength } from '../loop/schedule.js';
import type { CompiledLoop } from './compile.js';
import type { Movement } from './movement.js';
import type { Action, Timeline } from './timeline.js';
import type { Run, RunEnd } from './trace.js';

/** Arrays for traces, grown as needed and used again from run to run, so that memory stays flat. */
export class TraceStore {
  times = new Float64Array(0);
  records: Float64Array[] = [];

  /** Makes room for so many signals and pieces. */
  reserve(signals: number, pieces: number): void {
    if (this.times.length < pieces + 1) this.times = new Float64Array(pieces + 1);
    while (this.records.length < signals) this.records.push(new Float64Array(0));
    for (let i = 0; i < signals; i++) {
      if (this.records[i].length < 4 * pieces) this.records[i] = new Float64Array(4 * pieces);
    }
  }
}

/** Everything one run needs. */
export interface RunRequest {
  compiled: CompiledLoop;
  /** The array at the start, as the layout says; it is not changed. */
  start: Float64Array;
  schedule: Schedule;
  timeline: Timeline;
  movement: Movement;
  /** Draws for each noise source, one for each sampling instant of its task. */
  noise: Float64Array[];
  signals: number;
  store: TraceStore;
}

/** Follows one plant through one scenario. */
export function runPlant(request: RunRequest): Run {
  const { compiled, timeline, movement, store } = request;
  const m = request.start.slice();
  const tasks = new TaskRunner(request, m);
  const stepsOf = timeline.durations.map((duration) => movement.steps(duration));
  store.reserve(
    request.signals,
    timeline.duration.reduce((sum, index) => sum + stepsOf[index], 0),
  );
  const { times, records } = store;
  const { state } = compiled.layout;
  const states = compiled.loop.states.length;
  let piece = 0;
  let end: RunEnd = { kind: 'complete' };
  for (let segment = 0; segment < timeline.action.length; segment++) {
    tasks.perform(timeline.actions[timeline.action[segment]]);
    const steps = stepsOf[timeline.duration[segment]];
    const h = timeline.durations[timeline.duration[segment]] / steps;
    for (let step = 0; step < steps; step++) {
      times[piece] = timeline.times[segment] + step * h;
      compiled.record(m, records, 4 * piece);
      if (states > 0) movement.move(m, h);
      compiled.record(m, records, 4 * piece + 2);
      piece++;
    }
    const bad = firstBad(m, state, states);
    if (bad >= 0) {
      const kind = Number.isNaN(m[state + bad]) ? 'not_a_number' : 'overflow';
      end = { kind, time: timeline.times[segment + 1], state: compiled.loop.states[bad].name };
      break;
    }
  }
  times[piece] = timeline.times[timeline.times.length - 1];
  return { times, records, pieces: piece, end };
}

/** The first state that left the finite numbers, or −1. A state beyond 1e100 is on its way out of them. */
function firstBad(m: Float64Array, from: number, count: number): number {
  for (let i = 0; i < count; i++) if (!(Math.abs(m[from + i]) < 1e100)) return i;
  return -1;
}

/** Runs the tasks of one plant: samples, computes, and delivers results after their delays. */
class TaskRunner {
  private readonly queues: Float64Array[];
  private readonly computed: Int32Array;
  private readonly delivered: Int32Array;
  private readonly heldOf: number[][];
  private readonly noisesOf: number[][];

  constructor(
    private readonly request: RunRequest,
    private readonly m: Float64Array,
  ) {
    const { loop } = request.compiled;
    const tasks = loop.tasks.map((_, task) => task);
    this.computed = new Int32Array(tasks.length);
    this.delivered = new Int32Array(tasks.length);
    this.heldOf = tasks.map((task) => loop.held.flatMap((held, i) => (held.task === task ? [i] : [])));
    this.queues = tasks.map(
      (task) => new Float64Array(this.heldOf[task].length * queueLength(request.schedule, task)),
    );
    this.noisesOf = tasks.map((task) => loop.noises.flatMap((owner, i) => (owner === task ? [i] : [])));
  }

  perform({ inputs, deliver, compute }: Action): void {
    const { compiled } = this.request;
    for (const { input, value } of inputs) this.m[compiled.layout.input + input] = value;
    for (const task of compute) this.sample(task);
    for (const task of deliver) this.deliver(task);
    for (const task of compute) {
      compiled.compute[task](this.m);
      this.send(task);
    }
  }

  private sample(task: number): void {
    const { compiled, noise } = this.request;
    for (const source of this.noisesOf[task]) {
      this.m[compiled.layout.noise + source] = noise[source][this.computed[task]];
    }
    compiled.sample[task](this.m);
  }

  /** Puts the results just computed on their way; without delay they take effect at once. */
  private send(task: number): void {
    const { pending, held } = this.request.compiled.layout;
    const own = this.heldOf[task];
    if (this.request.schedule.delay[task] === 0) {
      for (const i of own) this.m[held + i] = this.m[pending + i];
    } else {
      const queue = this.queues[task];
      let at = (this.computed[task] * own.length) % queue.length || 0;
      for (const i of own) queue[at++] = this.m[pending + i];
    }
    this.computed[task]++;
  }

  private deliver(task: number): void {
    const { held } = this.request.compiled.layout;
    const own = this.heldOf[task];
    const queue = this.queues[task];
    let at = (this.delivered[task] * own.length) % queue.length || 0;
    for (const i of own) this.m[held + i] = queue[at++];
    this.delivered[task]++;
  }
}
