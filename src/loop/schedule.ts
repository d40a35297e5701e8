import { Evaluation } from './evaluate.js';
import { asFraction, type Fraction, leastCommonMultiple } from './fraction.js';
import { dependsOn, type Node } from './graph.js';
import { type Loop, LoopError } from './loop.js';

/** What happens at one instant. Readings of all computing tasks are sampled first, then the rest in this order. */
export interface Instant {
  /** In ticks from the start. */
  tick: number;
  /** Channels by which earlier results arrive now. */
  deliver: number[];
  /** Tasks which compute now; what goes by a channel without delay takes effect at once. */
  compute: number[];
}

/** The periodic pattern of all tasks, in exact ticks. */
export interface Schedule {
  ticksPerSecond: number;
  period: number[];
  phase: number[];
  /** By how much sampling instants are late at most, in ticks that need not be whole; traces only. */
  jitter: number[];
  /** For each channel its task and its delay. */
  channels: { task: number; delay: number }[];
  /** After so many ticks the pattern repeats. */
  cycle: number;
}

/** With more periods than this in a cycle, the tasks have no common pattern worth the name. */
const longestCycle = 1e7;

/**
 * The schedule of a loop's tasks for one plant.
 * @throws {LoopError} for a period that is not above zero, a negative delay, or periods without a common cycle.
 */
export function scheduleOf(loop: Loop, parameters: ArrayLike<number>): Schedule {
  const evaluation = new Evaluation({ parameter: parameters });
  const timeOf = (task: number, word: string, node: Node): number => {
    const time = evaluation.of(node);
    const least = word === 'sampling period' ? Number.MIN_VALUE : 0;
    if (time >= least && Number.isFinite(time)) return time;
    const { name, place } = loop.tasks[task];
    const expected = least === 0 ? '0 or more' : 'one above 0';
    throw new LoopError(`controller '${name}' has a ${word} of ${time} s, expected ${expected}`, place);
  };
  const exactly = (time: number, node: Node): Fraction => asFraction(moves(node) ? toNanosecond(time) : time);
  const periods = periodsOf(
    loop,
    loop.tasks.map(({ period }, task) => timeOf(task, 'sampling period', period)),
  );
  const phases = loop.tasks.map(({ phase }, task) => exactly(timeOf(task, 'phase', phase), phase));
  const jitters = loop.tasks.map(({ jitter, name, place }, task) => {
    const time = evaluation.of(jitter);
    const period = evaluation.of(loop.tasks[task].period);
    if (time >= 0 && time < period) return time;
    throw new LoopError(
      `controller '${name}' has a jitter of ${time} s, expected 0 to less than its period`,
      place,
    );
  });
  const delays = loop.channels.map(({ task, delay }) => exactly(timeOf(task, 'delay', delay), delay));
  const perSecond = leastCommonMultiple(
    [...periods, ...phases, ...delays].map(({ denominator }) => denominator),
  );
  const inTicks = ({ numerator, denominator }: Fraction): number =>
    Number((numerator * perSecond) / denominator);
  const period = periods.map(inTicks);
  return {
    ticksPerSecond: Number(perSecond),
    period,
    phase: phases.map(inTicks),
    jitter: jitters.map((time) => time * Number(perSecond)),
    channels: loop.channels.map(({ task }, i) => ({ task, delay: inTicks(delays[i]) })),
    cycle: cycleOf(loop, period),
  };
}

function moves(node: Node): boolean {
  return dependsOn(node, ['parameter']);
}

/** A ratio of periods with larger terms than this is one of clocks that have nothing to do with one another. */
const largestTerm = 10_000n;

/** Periods that move with a parameter keep a simple ratio to the first such one: the error of one clock moves them together. */
function periodsOf({ tasks }: Loop, periods: readonly number[]): Fraction[] {
  const first = tasks.findIndex(({ period }) => moves(period));
  return periods.map((time, task) => {
    if (!moves(tasks[task].period)) return asFraction(time);
    const base = asFraction(toNanosecond(periods[first]));
    const ratio = asFraction(time / periods[first]);
    if (ratio.numerator > largestTerm || ratio.denominator > largestTerm)
      return asFraction(toNanosecond(time));
    return {
      numerator: base.numerator * ratio.numerator,
      denominator: base.denominator * ratio.denominator,
    };
  });
}

/** Times that differ from plant to plant would else have no common tick with the others. */
function toNanosecond(time: number): number {
  return Math.round(time * 1e9) / 1e9;
}

function cycleOf({ tasks }: Loop, period: number[]): number {
  const cycle = leastCommonMultiple(period.map(BigInt));
  if (tasks.length === 0 || cycle / BigInt(Math.min(...period)) <= BigInt(longestCycle)) return Number(cycle);
  const [{ place }] = tasks;
  throw new LoopError('the periods of the controllers have no common cycle of a usable length', place);
}

/** How many results can be on their way by a channel at once, the next one included. */
export function queueLength({ channels, period }: Schedule, channel: number): number {
  const { task, delay } = channels[channel];
  return Math.floor(delay / period[task]) + 1;
}

/** The instants from tick `from` (included) to `to` (excluded), in order of time. */
export function instantsBetween({ period, phase, channels }: Schedule, from: number, to: number): Instant[] {
  const series = [
    ...period.map((every, index) => ({ what: 'compute' as const, index, every, first: phase[index] })),
    ...channels.flatMap(({ task, delay }, index) =>
      delay === 0
        ? []
        : [{ what: 'deliver' as const, index, every: period[task], first: phase[task] + delay }],
    ),
  ].map((one) => ({
    ...one,
    next: one.first + Math.max(0, Math.ceil((from - one.first) / one.every)) * one.every,
  }));
  const instants: Instant[] = [];
  for (;;) {
    const tick = Math.min(...series.map(({ next }) => next));
    if (!(tick < to)) return instants;
    const instant: Instant = { tick, deliver: [], compute: [] };
    for (const one of series) {
      if (one.next !== tick) continue;
      instant[one.what].push(one.index);
      one.next += one.every;
    }
    instants.push(instant);
  }
}
