import type { Schedule } from '../loop/schedule.js';
import type { CompiledLoop } from './compile.js';
import { JumpFinder } from './jump_finder.js';
import type { Movement } from './movement.js';
import { TaskRunner } from './task_runner.js';
import type { Timeline } from './timeline.js';
import type { Run, RunEnd } from './trace.js';

/** Arrays for traces, grown as needed and used again from run to run, so that memory stays flat. */
export class TraceStore {
  times = new Float64Array(0);
  readonly records: Float64Array[] = [];
  private readonly lent: Float64Array[] = [];
  private lentCount = 0;

  /** Takes back all that was lent for the last run. */
  begin(): void {
    this.lentCount = 0;
  }

  /** An array for what is made of the run's records; it belongs to the next run again. Its contents are left over. */
  lend(length: number): Float64Array {
    const at = this.lentCount++;
    if ((this.lent[at]?.length ?? 0) < length) this.lent[at] = new Float64Array(length);
    return this.lent[at].subarray(0, length);
  }

  /** Makes room for so many signals and pieces, and keeps what is there. */
  reserve(signals: number, pieces: number): void {
    if (this.times.length < pieces + 1) this.times = grown(this.times, pieces + 1);
    while (this.records.length < signals) this.records.push(new Float64Array(0));
    for (let i = 0; i < signals; i++) {
      if (this.records[i].length < 4 * pieces) this.records[i] = grown(this.records[i], 4 * pieces);
    }
  }
}

function grown(array: Float64Array, length: number): Float64Array<ArrayBuffer> {
  const larger = new Float64Array(length);
  larger.set(array);
  return larger;
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
  const { compiled, timeline, movement, store, signals } = request;
  const m = request.start.slice();
  store.begin();
  const tasks = new TaskRunner(compiled, request.schedule, request.noise, m);
  const stepsOf = timeline.durations.map((duration) => movement.steps(duration));
  store.reserve(
    signals,
    timeline.duration.reduce((sum, index) => sum + stepsOf[index].length, 0),
  );
  const finder = compiled.jumps && new JumpFinder(compiled, movement);
  const advance = advanceOf(compiled, movement, finder);
  const settle = settleOf(compiled, finder);
  let piece = 0;
  let end: RunEnd = { kind: 'complete' };
  for (let segment = 0; segment < timeline.action.length; segment++) {
    tasks.perform(timeline.actions[timeline.action[segment]]);
    settle(m);
    let time = timeline.times[segment];
    for (const h of stepsOf[timeline.duration[segment]]) {
      for (let left = 1; left > 0; piece++) {
        if (piece >= store.times.length - 1) store.reserve(signals, 2 * piece + 16);
        store.times[piece] = time;
        compiled.record(m, store.records, 4 * piece);
        const moved = advance(m, h, left);
        compiled.record(m, store.records, 4 * piece + 2);
        finder?.cross(m, h);
        settle(m);
        time += moved * h;
        left -= moved;
      }
    }
    const bad = badState(compiled, m);
    if (bad) {
      end = { ...bad, time: timeline.times[segment + 1] };
      break;
    }
  }
  store.times[piece] = timeline.times[timeline.times.length - 1];
  const lend = (length: number): Float64Array => store.lend(length);
  return { times: store.times, records: store.records, pieces: piece, end, lend };
}

/** Moves by at most a share of a step of h (s), 1 where the step begins, and returns by which. */
type Advance = (m: Float64Array, h: number, most: number) => number;

function advanceOf(compiled: CompiledLoop, movement: Movement, finder: JumpFinder | undefined): Advance {
  if (compiled.loop.states.length === 0) return (_, __, most) => most;
  if (!finder) {
    return (m, h, most) => movement.move(m, h, most);
  }
  return (m, h, most) => {
    if (most === 1) finder.newStep();
    return finder.move(m, h, most);
  };
}

/** Takes modes anew and corrects states where something has happened. */
function settleOf({ settle }: CompiledLoop, finder: JumpFinder | undefined): (m: Float64Array) => void {
  if (finder) return (m) => finder.settle(m);
  return settle ?? (() => {});
}

/** The first state that left the finite numbers. One beyond 1e100 is on its way out of them. */
function badState(
  { layout, loop }: CompiledLoop,
  m: Float64Array,
): { kind: 'not_a_number' | 'overflow'; state: string } | undefined {
  for (let i = 0; i < loop.states.length; i++) {
    const value = m[layout.state + i];
    if (Math.abs(value) < 1e100) continue;
    return { kind: Number.isNaN(value) ? 'not_a_number' : 'overflow', state: loop.states[i].name };
  }
  return undefined;
}
