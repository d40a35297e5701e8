import type { Loop } from '../loop/loop.js';
import type { Instant, Schedule } from '../loop/schedule.js';
import type { ColumnGroup, RowGroup } from './linearise.js';

/** What is known of a loop at an instant. */
export type Known = Exclude<ColumnGroup, 'input'>;

/** For each value that is known its row: the value as a combination of what the cycle began with and of the injections. */
export type KnownRows<Row> = Record<Known, Row[]>;

/** How rows are made and moved: with numbers for one plant, with bounds for many. */
export interface RowArithmetic<Row> {
  nothing(width: number): Row;
  unit(width: number, column: number): Row;
  isNothing(row: Row, column: number): boolean;
  /** One equation of a group, from the known values that it may depend on. */
  equation(group: RowGroup, index: number, from: readonly Known[], rows: KnownRows<Row>): Row;
  /** The states at the end of a gap between instants; number 0 is that before the first of them. */
  moved(gap: number, rows: KnownRows<Row>): Row[];
}

/** One cycle of all controllers: what happens in it, and where it begins. */
export interface Cycle {
  schedule: Schedule;
  /** In ticks of the schedule, when every channel has delivered before. */
  start: number;
  instants: readonly Instant[];
}

/** What a cycle makes of what it began with. */
export interface Walked<Row> {
  /** Values that are kept over the cycle, as they are at its end. */
  end: Row[];
  /** What opened signals would have been, in the order in which they come. */
  returned: { opening: number; row: Row }[];
  /** How many values are kept; the columns after them are injections. */
  known: number;
  /**
   * Of the kept values those which an injection moves and which move what returns. The others take no part in this loop: a
   * position that nobody senses would otherwise stand in the result as an integrator.
   */
  influential: number[];
}

/** The first start of a cycle from which on every channel delivers what it should. */
export function settledStart({ channels, phase, cycle }: Schedule): number {
  const settled = Math.max(0, ...channels.map(({ task, delay }) => phase[task] + delay));
  return Math.ceil(settled / cycle) * cycle;
}

/**
 * Walks through one cycle of an opened loop: states move between instants, and everything else happens at its instant, in the
 * order in which the kernel has it. Delays and several rates are included.
 */
export function walkCycle<Row>(loop: Loop, cycle: Cycle, arithmetic: RowArithmetic<Row>): Walked<Row> {
  return new CycleWalk(loop, cycle, arithmetic).run();
}

class CycleWalk<Row> {
  private readonly width: number;
  private readonly known: number;
  private readonly rows: KnownRows<Row>;
  /** Results under way, oldest first, by channel; each a row for every held value of the channel. */
  private readonly queues: Row[][][];
  private readonly returned: Walked<Row>['returned'] = [];

  constructor(
    private readonly loop: Loop,
    private readonly cycle: Cycle,
    private readonly arithmetic: RowArithmetic<Row>,
  ) {
    const { schedule } = cycle;
    const perCycle = ({ task }: { task: number }): number => schedule.cycle / schedule.period[task];
    const injections = loop.openings.reduce((sum, opening) => sum + perCycle(opening), 0);
    const underWay = schedule.channels.map((_, channel) => this.resultsUnderWay(channel));
    const heldBy = loop.channels.map((_, at) => loop.held.filter(({ channel }) => channel === at).length);
    this.known =
      loop.states.length +
      loop.held.length +
      loop.memories.length +
      loop.openings.length +
      underWay.reduce((sum, count, channel) => sum + count * heldBy[channel], 0);
    this.width = this.known + injections;
    let next = 0;
    const fresh = (count: number): Row[] =>
      Array.from({ length: count }, () => arithmetic.unit(this.width, next++));
    this.rows = {
      state: fresh(loop.states.length),
      held: fresh(loop.held.length),
      memory: fresh(loop.memories.length),
      reading: loop.readings.map(() => arithmetic.nothing(this.width)),
      injected: fresh(loop.openings.length),
    };
    this.queues = underWay.map((count, channel) =>
      Array.from({ length: count }, () => fresh(heldBy[channel])),
    );
  }

  run(): Walked<Row> {
    const { instants } = this.cycle;
    instants.forEach(({ compute, deliver }, gap) => {
      this.rows.state = this.arithmetic.moved(gap, this.rows);
      this.sample(compute);
      for (const channel of deliver) this.deliver(channel, this.queues[channel].shift()!);
      for (const task of compute) this.compute(task);
    });
    this.rows.state = this.arithmetic.moved(instants.length, this.rows);
    const { state, held, memory, injected } = this.rows;
    const end = [...state, ...held, ...memory, ...injected, ...this.queues.flat(2)];
    const { returned, known } = this;
    return { end, returned, known, influential: this.influential(end) };
  }

  /** Results of a channel that are computed before the start of the cycle and delivered at or after it. */
  private resultsUnderWay(channel: number): number {
    const { start, schedule } = this.cycle;
    const { task, delay } = schedule.channels[channel];
    if (delay === 0) return 0;
    const sinceFirst = start - schedule.phase[task];
    const period = schedule.period[task];
    return Math.ceil(sinceFirst / period) - Math.ceil((sinceFirst - delay) / period);
  }

  /** Equations of a group at this instant, only those that `wanted` picks. */
  private evaluate(
    group: RowGroup,
    count: number,
    wanted: (index: number) => boolean,
    from: readonly Known[],
  ): Map<number, Row> {
    const result = new Map<number, Row>();
    for (let index = 0; index < count; index++) {
      if (wanted(index)) result.set(index, this.arithmetic.equation(group, index, from, this.rows));
    }
    return result;
  }

  private sample(tasks: readonly number[]): void {
    const { readings } = this.loop;
    const isSampled = (i: number): boolean => tasks.includes(readings[i].task);
    const sampled = this.evaluate('reading', readings.length, isSampled, ['state', 'held', 'injected']);
    for (const [i, row] of sampled) this.rows.reading[i] = row;
  }

  private deliver(channel: number, results: Row[]): void {
    this.loop.held.forEach((held, i) => {
      if (held.channel === channel) this.rows.held[i] = results.shift()!;
    });
  }

  private compute(task: number): void {
    const { loop, rows } = this;
    const { channels } = this.cycle.schedule;
    this.inject(task);
    const from = ['reading', 'memory', 'held', 'injected'] as const;
    const isOfTask = (i: number): boolean => loop.memories[i].task === task;
    const memories = this.evaluate('memory', loop.memories.length, isOfTask, from);
    const own = channels.flatMap((channel, at) => (channel.task === task ? [at] : []));
    const results = own.map((channel) => [
      ...this.evaluate('held', loop.held.length, (i) => loop.held[i].channel === channel, from).values(),
    ]);
    own.forEach((channel, i) => {
      if (channels[channel].delay > 0) this.queues[channel].push(results[i]);
      else this.deliver(channel, results[i]);
    });
    for (const [i, row] of memories) rows.memory[i] = row;
  }

  /**
   * Lets the consumers of the task's opened signals see their next injected values, and keeps what those signals would have
   * been: one that is computed from another at the same instant sees what is injected there.
   */
  private inject(task: number): void {
    const { openings } = this.loop;
    const isOfTask = (index: number): boolean => openings[index].task === task;
    let next = this.known + this.returned.length;
    this.rows.injected = this.rows.injected.map((row, index) =>
      isOfTask(index) ? this.arithmetic.unit(this.width, next++) : row,
    );
    const from = ['state', 'reading', 'memory', 'held', 'injected'] as const;
    const found = this.evaluate('returned', openings.length, isOfTask, from);
    for (const [opening, row] of found) this.returned.push({ opening, row });
  }

  private influential(end: Row[]): number[] {
    const { arithmetic, known, width } = this;
    const all = Array.from({ length: known }, (_, i) => i);
    const depends = (row: Row, column: number): boolean => !arithmetic.isNothing(row, column);
    const injections = Array.from({ length: width - known }, (_, i) => known + i);
    const moved = spread(
      all.filter((i) => injections.some((column) => depends(end[i], column))),
      (i) => all.filter((j) => depends(end[j], i)),
    );
    const moving = spread(
      all.filter((i) => this.returned.some(({ row }) => depends(row, i))),
      (i) => all.filter((j) => depends(end[i], j)),
    );
    return all.filter((i) => moved.has(i) && moving.has(i));
  }
}

function spread(first: number[], next: (index: number) => number[]): Set<number> {
  const reached = new Set(first);
  for (const index of reached) for (const following of next(index)) reached.add(following);
  return reached;
}
