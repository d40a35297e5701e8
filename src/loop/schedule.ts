import { Evaluation } from './evaluate.js';
import { asFraction, leastCommonMultiple } from './fraction.js';
import { type Loop, LoopError } from './loop.js';

/** What happens at one instant. Readings of all computing tasks are sampled first, then the rest in this order. */
export interface Instant {
  /** In ticks from the start. */
  tick: number;
  /** Tasks whose earlier results take effect now. */
  deliver: number[];
  /** Tasks which compute now; one without delay takes effect at once. */
  compute: number[];
}

/** The periodic pattern of all tasks, in exact ticks. */
export interface Schedule {
  /** Length of a tick in s. */
  tick: number;
  ticksPerSecond: number;
  period: number[];
  phase: number[];
  delay: number[];
  /** After so many ticks the pattern repeats. */
  cycle: number;
}

/** More ticks than this in a cycle, and the tasks' periods have no common pattern worth the name. */
const longestCycle = 1e7;

/**
 * The schedule of a loop's tasks for one plant.
 * @throws {LoopError} for a period that is not above zero, or periods without a common cycle.
 */
export function scheduleOf(loop: Loop, parameters: ArrayLike<number>): Schedule {
  const evaluation = new Evaluation({ parameter: parameters });
  const times = loop.tasks.map((task) => {
    const [period, phase, delay] = [task.period, task.phase, task.delay].map((node) => evaluation.of(node));
    if (!(period > 0) || !Number.isFinite(period)) {
      throw new LoopError(
        `controller '${task.name}' has a sampling period of ${period} s, expected one above 0`,
        task.place,
      );
    }
    for (const [word, time] of [
      ['phase', phase],
      ['delay', delay],
    ] as const) {
      if (!(time >= 0) || !Number.isFinite(time)) {
        throw new LoopError(
          `controller '${task.name}' has a ${word} of ${time} s, expected 0 or more`,
          task.place,
        );
      }
    }
    return [period, phase, delay].map(asFraction);
  });
  const perSecond = leastCommonMultiple(times.flat().map(({ denominator }) => denominator));
  const ticks = times.map((of) =>
    of.map(({ numerator, denominator }) => Number((numerator * perSecond) / denominator)),
  );
  const cycle = leastCommonMultiple(ticks.map(([period]) => BigInt(period)));
  if (
    loop.tasks.length > 0 &&
    cycle / BigInt(Math.min(...ticks.map(([period]) => period))) > BigInt(longestCycle)
  ) {
    throw new LoopError(
      'the controllers’ periods have no common cycle of a usable length',
      loop.tasks[0].place,
    );
  }
  return {
    tick: 1 / Number(perSecond),
    ticksPerSecond: Number(perSecond),
    period: ticks.map(([period]) => period),
    phase: ticks.map(([, phase]) => phase),
    delay: ticks.map(([, , delay]) => delay),
    cycle: Number(cycle),
  };
}

/** How many results of a task can be on their way at once, its next one included. */
export function queueLength(schedule: Schedule, task: number): number {
  return Math.floor(schedule.delay[task] / schedule.period[task]) + 1;
}

/** The instants from tick `from` (included) to `to` (excluded), in order of time. */
export function instantsBetween(schedule: Schedule, from: number, to: number): Instant[] {
  const byTick = new Map<number, Instant>();
  const at = (tick: number): Instant => {
    const instant = byTick.get(tick) ?? { tick, deliver: [], compute: [] };
    byTick.set(tick, instant);
    return instant;
  };
  schedule.period.forEach((period, task) => {
    const { [task]: phase } = schedule.phase;
    const { [task]: delay } = schedule.delay;
    for (const tick of multiples(phase, period, from, to)) at(tick).compute.push(task);
    if (delay > 0) for (const tick of multiples(phase + delay, period, from, to)) at(tick).deliver.push(task);
  });
  return [...byTick.values()].sort((a, b) => a.tick - b.tick);
}

function multiples(first: number, period: number, from: number, to: number): number[] {
  const start = first + Math.max(0, Math.ceil((from - first) / period)) * period;
  const ticks: number[] = [];
  for (let tick = start; tick < to; tick += period) ticks.push(tick);
  return ticks;
}
