import type { Schedule } from '../loop/schedule.js';
import type { CompiledLoop } from './compile.js';
import type { Movement } from './movement.js';
import { TaskRunner } from './task_runner.js';
import type { Timeline } from './timeline.js';
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
  const tasks = new TaskRunner(compiled, request.schedule, request.noise, m);
  const stepsOf = timeline.durations.map((duration) => movement.steps(duration));
  store.reserve(
    request.signals,
    timeline.duration.reduce((sum, index) => sum + stepsOf[index].length, 0),
  );
  const { times, records } = store;
  const { state } = compiled.layout;
  const states = compiled.loop.states.length;
  let piece = 0;
  let end: RunEnd = { kind: 'complete' };
  for (let segment = 0; segment < timeline.action.length; segment++) {
    tasks.perform(timeline.actions[timeline.action[segment]]);
    compiled.settle?.(m);
    let time = timeline.times[segment];
    for (const h of stepsOf[timeline.duration[segment]]) {
      times[piece] = time;
      compiled.record(m, records, 4 * piece);
      if (states > 0) movement.move(m, h);
      compiled.settle?.(m);
      compiled.record(m, records, 4 * piece + 2);
      time += h;
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
