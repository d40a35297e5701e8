import { type Cycle, settledStart } from '../../linear/cycle_walk.js';
import { dependsOn } from '../../loop/graph.js';
import type { Loop } from '../../loop/loop.js';
import { type Instant, instantsBetween, type Schedule } from '../../loop/schedule.js';
import { size } from './interval.js';
import type { Slope, SlopeField } from './slope.js';
import { type SlopeEvaluation, Unprovable } from './slope_evaluation.js';

/** One order in which things happen in a cycle, as one plant has it, and after what times, over all plants that have it. */
export interface SlopeTiming extends Cycle {
  /** From the start to the first instant, on to the next ones, and from the last to the end, s. */
  gaps: Slope[];
}

/** On so wide a box things happen in too many orders; this variable moves their times most. */
export interface ManyOrders {
  cut: number;
}

const mostOrders = 6;
/** Times that depend on parameters are rounded to the nanosecond. */
const halfNanosecond = 0.5e-9;

/** A clock: its ticks, in which every controller's period is a whole number, and how long one is. */
interface Clock {
  /** For one plant; what moves with parameters is taken from `delays`. */
  schedule: Schedule;
  /** s; it may move with parameters. */
  tick: Slope;
  /** Delays of channels that move with parameters, in ticks. */
  delays: Map<number, Slope>;
}

/**
 * Every order that plants of a box may have. Where a delivery falls on a sampling instant, the orders before and after it
 * give the same loop, so that each of them serves up to and with that plant.
 * @param nominal the nominal plant's schedule.
 * @throws {Unprovable} where periods of several controllers, or delays of more than one, move with parameters.
 */
export function timingsOver(
  loop: Loop,
  nominal: Schedule,
  evaluation: SlopeEvaluation,
): SlopeTiming[] | ManyOrders {
  const { field } = evaluation;
  const clock = clockOf(loop, nominal, evaluation);
  const moving = [...clock.delays.keys()];
  if (new Set(moving.map((channel) => clock.schedule.channels[channel].task)).size > 1) {
    throw new Unprovable('delays of several controllers move with parameters');
  }
  const choices = moving.map((channel) => cellsOf(clock, channel));
  const orders = choices.reduce((product, { length }) => product * length, 1);
  if (orders > mostOrders) return { cut: mostMovingOf(field, [...clock.delays.values()]) };
  const timings: SlopeTiming[] = [];
  for (let code = 0; code < orders; code++) {
    let rest = code;
    const cells = choices.map((all) => {
      const cell = all[rest % all.length];
      rest = Math.floor(rest / all.length);
      return cell;
    });
    const delays = inOrder(field, clock, cells);
    if (!delays) return { cut: mostMovingOf(field, [...clock.delays.values()]) };
    timings.push(timingOf(field, clock, cells, delays));
  }
  return timings;
}

function clockOf(loop: Loop, nominal: Schedule, evaluation: SlopeEvaluation): Clock {
  const { field } = evaluation;
  const rounded = (time: Slope): Slope => field.add(time, field.between([-halfNanosecond, halfNanosecond]));
  const isMoving = loop.channels.map(({ delay }) => dependsOn(delay, ['parameter']));
  const delayOf = (channel: number): Slope => {
    const delay = evaluation.of(loop.channels[channel].delay);
    // Without any delay a controller is heard at the same instant by those that compute after it.
    if (delay.range[0] < 0 || (delay.range[0] === 0 && isMoving[channel] && loop.tasks.length > 1)) {
      throw new Unprovable('a delay that moves with a parameter may be nothing');
    }
    return isMoving[channel] ? rounded(delay) : delay;
  };
  const channels = [...loop.channels.keys()];
  if (
    loop.tasks.every(({ period, phase }) => ![period, phase].some((one) => dependsOn(one, ['parameter'])))
  ) {
    const perSecond = field.constant(nominal.ticksPerSecond);
    const delays = channels
      .filter((channel) => isMoving[channel])
      .map((channel) => [channel, field.multiply(delayOf(channel), perSecond)] as const);
    return {
      schedule: nominal,
      tick: field.divide(field.constant(1), perSecond),
      delays: new Map(delays),
    };
  }
  if (loop.tasks.length > 1) throw new Unprovable('the timing of several controllers moves with a parameter');
  // Of one controller alone the period is the tick, and its phase means nothing.
  const tick = rounded(evaluation.of(loop.tasks[0].period));
  const delays = channels
    .filter((channel) => nominal.channels[channel].delay > 0 || isMoving[channel])
    .map((channel) => [channel, field.divide(delayOf(channel), tick)] as const);
  const schedule = {
    ...nominal,
    period: [1],
    phase: [0],
    cycle: 1,
    channels: nominal.channels.map(({ task }) => ({ task, delay: 0 })),
  };
  return { schedule, tick, delays: new Map(delays) };
}

/** Between two of these delays nothing else happens that has a fixed time. */
type Cell = readonly [low: number, high: number];

/** The cells that a channel's delay may lie in. */
function cellsOf({ schedule, delays }: Clock, channel: number): Cell[] {
  const { period, phase, channels, cycle } = schedule;
  const { task } = channels[channel];
  const every = period[task];
  const fixed = {
    ...schedule,
    channels: channels.map((one, i) => (delays.has(i) ? { ...one, delay: 0 } : one)),
  };
  const start = settledStart(fixed);
  const within = instantsBetween(fixed, start, start + cycle).map(
    ({ tick }) => (((tick - phase[task]) % every) + every) % every,
  );
  const ends = [...new Set(within)].sort((a, b) => a - b);
  const [least, most] = delays.get(channel)!.range;
  const cells: Cell[] = [];
  for (let lap = Math.max(0, Math.floor(least / every) - 1); lap * every <= most; lap++) {
    ends.forEach((end, i) => {
      const low = lap * every + end;
      const high = lap * every + (ends[i + 1] ?? every + ends[0]);
      if (high >= least && low <= most) cells.push([low, high]);
    });
  }
  return cells;
}

/** Delays inside the cells, for one plant, that tell the order of channels in one cell; undefined where it may be either. */
function inOrder(field: SlopeField, { delays }: Clock, cells: readonly Cell[]): number[] | undefined {
  const all = [...delays.values()];
  let isKnown = true;
  const before = (i: number, j: number): boolean => {
    const { range } = field.subtract(all[i], all[j]);
    if (range[0] < 0 && range[1] > 0) isKnown = false;
    return range[1] <= 0 && (range[0] < 0 || i < j);
  };
  const chosen = cells.map(([low, high], i) => {
    const together = all.flatMap((_, j) => (j !== i && cells[j][0] === low ? [j] : []));
    const rank = together.filter((j) => before(j, i)).length;
    return low + ((high - low) * (rank + 1)) / (together.length + 2);
  });
  return isKnown ? chosen : undefined;
}

function timingOf(field: SlopeField, clock: Clock, cells: readonly Cell[], delays: number[]): SlopeTiming {
  const moving = [...clock.delays.keys()];
  const channels = clock.schedule.channels.map((one, channel) => {
    const at = moving.indexOf(channel);
    return at < 0 ? one : { ...one, delay: delays[at] };
  });
  const schedule = { ...clock.schedule, channels };
  const { cycle, phase, period } = schedule;
  const start = settledStart(schedule);
  const instants = instantsBetween(schedule, start, start + cycle);
  const timeOf = ({ tick, deliver }: Instant): Slope => {
    const at = moving.indexOf(deliver[0]);
    if (at < 0) return field.constant(tick - start);
    const { task, delay } = channels[moving[at]];
    const sampled = phase[task] + Math.round((tick - phase[task] - delay) / period[task]) * period[task];
    return field.add(field.constant(sampled - start), inside(clock.delays.get(moving[at])!, cells[at]));
  };
  const times = [field.constant(0), ...instants.map(timeOf), field.constant(cycle)];
  const gaps = times.slice(1).map((time, i) => {
    const gap = notNegative(field.subtract(time, times[i]));
    return field.multiply(gap, clock.tick);
  });
  return { schedule, start, instants, gaps };
}

/** Of the plants of the box only those whose value lies in the cell. */
function inside(value: Slope, [low, high]: Cell): Slope {
  const [least, most] = value.range;
  return { ...value, range: [Math.max(low, least), Math.min(high, most)] };
}

function notNegative(value: Slope): Slope {
  const [least, most] = value.range;
  return { ...value, range: [Math.max(0, least), Math.max(0, most)] };
}

function mostMovingOf(field: SlopeField, delays: readonly Slope[]): number {
  const moves = field.box.map(([low, high], i) =>
    Math.max(...delays.map(({ slopes }) => size(slopes[i]) * (high - low))),
  );
  return moves.indexOf(Math.max(...moves));
}
