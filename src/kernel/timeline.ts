import { uniformDraws } from '../loop/random_draws.js';
import { instantsBetween, type Schedule } from '../loop/schedule.js';

/** A change by the scenario: from `time` (s) on an input, or a state of the scenario's own, is `value` (SI). */
export interface ScenarioChange {
  kind: 'input' | 'state';
  index: number;
  time: number;
  value: number;
}

/** What happens together at one time, in the order of the fields. */
export interface Action {
  changes: Omit<ScenarioChange, 'time'>[];
  deliver: number[];
  compute: number[];
}

/** A scenario cut into segments between which nothing happens. */
export interface Timeline {
  /** Times of the actions and of the end, s; one more than segments. */
  times: Float64Array;
  /** What happens at `times[i]`, before segment i; an index into `actions`. */
  action: Int32Array;
  actions: Action[];
  /** Length of segment i, an index into `durations` (s); few are different. */
  duration: Int32Array;
  durations: number[];
}

/** Two times closer than this share of a tick are the same instant. */
const sameInstant = 1e-6;

/**
 * Cuts the time from 0 to `lasts` (s) at every instant of the schedule and every change of an input.
 * @param seed for the lateness of sampling instants with jitter.
 */
export function timelineOf(
  schedule: Schedule,
  changes: readonly ScenarioChange[],
  lasts: number,
  seed: number,
): Timeline {
  const rate = schedule.ticksPerSecond;
  const end = lasts * rate;
  const byTick = new Map<number, Action>();
  const at = (tick: number): Action => {
    const action = byTick.get(tick) ?? { changes: [], deliver: [], compute: [] };
    byTick.set(tick, action);
    return action;
  };
  at(0);
  const lateness = latenessOf(schedule, end, seed);
  for (const { tick, deliver, compute } of instantsBetween(schedule, 0, end)) {
    for (const task of compute) at(tick + lateness(task, tick, 0)).compute.push(task);
    for (const channel of deliver) {
      const { task, delay } = schedule.channels[channel];
      at(tick + lateness(task, tick, delay)).deliver.push(channel);
    }
  }
  for (const { time, ...change } of changes) {
    if (time >= lasts) continue;
    const tick = time * rate;
    const whole = Math.round(tick);
    at(Math.abs(tick - whole) < sameInstant ? whole : tick).changes.push(change);
  }
  const ticks = [...byTick.keys()].filter((tick) => tick < end).sort((a, b) => a - b);
  const actions = new Indexed<Action, string>(keyOf);
  const durations = new Indexed<number, number>((duration) => duration);
  const following = [...ticks.slice(1), end];
  return {
    times: Float64Array.from([...ticks.map((tick) => tick / rate), lasts]),
    action: Int32Array.from(ticks, (tick) => actions.indexOf(byTick.get(tick)!)),
    actions: actions.items,
    duration: Int32Array.from(ticks, (tick, i) => durations.indexOf((following[i] - tick) / rate)),
    durations: durations.items,
  };
}

/** By how many ticks what happens at a tick, `delay` after a sampling instant of the task, is late. */
function latenessOf(
  { period, phase, jitter }: Schedule,
  end: number,
  seed: number,
): (task: number, tick: number, delay: number) => number {
  const draws = jitter.map((most, task) =>
    most === 0 ? undefined : uniformDraws(seed, task + 1_000_000, Math.ceil(end / period[task]) + 1),
  );
  return (task, tick, delay) => {
    const own = draws[task];
    return own ? jitter[task] * own[Math.round((tick - delay - phase[task]) / period[task])] : 0;
  };
}

function keyOf({ changes, deliver, compute }: Action): string {
  return `${compute} ${deliver} ${changes.length === 0 ? '' : JSON.stringify(changes)}`;
}

/** Numbers equal items by their first appearance. */
class Indexed<T, K> {
  readonly items: T[] = [];
  private readonly known = new Map<K, number>();

  constructor(private readonly keyOf: (item: T) => K) {}

  indexOf(item: T): number {
    const key = this.keyOf(item);
    const found = this.known.get(key);
    if (found !== undefined) return found;
    this.known.set(key, this.items.length);
    return this.items.push(item) - 1;
  }
}
