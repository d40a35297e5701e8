import { Evaluation, type LeafValues } from '../loop/evaluate.js';
import { instantsBetween, type Schedule } from '../loop/schedule.js';
import { discretise } from './exponential.js';
import type { Linearisation, RowGroup } from './linearise.js';
import { type Matrix, place, zeros } from './matrix.js';
import type { StateEquations } from './state_equations.js';
import { stateEquations } from './state_equations.js';

/** A row of a linear map: a value as a combination of what the loop knew at the start of the cycle and the injections. */
type Row = Float64Array;

/**
 * The loop transfer L = −(returned / injected) of an opened loop over one cycle of its schedule, exact: states move by the
 * matrix exponential between instants, and everything else happens at its instant, delays and several rates included.
 * One injection in a cycle gives one input and one output. More give the lifted loop: an input and the output that belongs
 * to it for each change of each opened signal, in the order in which they come.
 * @param leaves parameters, inputs, and the point at which the loop is linearised.
 * @param sizes what counts as one of each opened signal, in its own unit; one unit unless given.
 */
export function openedLoop(
  linearisation: Linearisation,
  schedule: Schedule,
  leaves: LeafValues,
  sizes: readonly number[] = linearisation.loop.openings.map(() => 1),
): StateEquations {
  return new Cycle(linearisation, schedule, new Evaluation(leaves, 'off'), sizes).run();
}

class Cycle {
  private readonly start: number;
  private readonly width: number;
  private readonly known: number;
  private readonly rows: Record<'state' | 'held' | 'memory' | 'reading' | 'injected', Row[]>;
  /** Results under way, oldest first, by channel; each a row for every held value of the channel. */
  private readonly queues: Row[][][];
  private readonly returned: Row[] = [];
  /** For each of these the size of its signal. */
  private readonly returnedSizes: number[] = [];
  private readonly slopeCache = new Map<string, Matrix>();
  private readonly moves = new Map<number, { phi: Matrix; gamma: Matrix }>();

  constructor(
    private readonly linearisation: Linearisation,
    private readonly schedule: Schedule,
    private readonly evaluation: Evaluation,
    private readonly sizes: readonly number[],
  ) {
    const { loop } = linearisation;
    const settled = Math.max(0, ...schedule.channels.map(({ task, delay }) => schedule.phase[task] + delay));
    this.start = Math.ceil(settled / schedule.cycle) * schedule.cycle;
    const injections = loop.openings.reduce(
      (sum, { task }) => sum + schedule.cycle / schedule.period[task],
      0,
    );
    const underWay = schedule.channels.map((_, channel) => resultsUnderWay(schedule, channel, this.start));
    const heldBy = loop.channels.map(
      (_, channel) => loop.held.filter((held) => held.channel === channel).length,
    );
    this.known =
      loop.states.length +
      loop.held.length +
      loop.memories.length +
      loop.openings.length +
      underWay.reduce((sum, count, channel) => sum + count * heldBy[channel], 0);
    this.width = this.known + injections;
    let next = 0;
    const fresh = (count: number): Row[] => Array.from({ length: count }, () => this.unit(next++));
    this.rows = {
      state: fresh(loop.states.length),
      held: fresh(loop.held.length),
      memory: fresh(loop.memories.length),
      reading: loop.readings.map(() => new Float64Array(this.width)),
      injected: fresh(loop.openings.length),
    };
    this.queues = underWay.map((count, channel) =>
      Array.from({ length: count }, () => fresh(heldBy[channel])),
    );
  }

  run(): StateEquations {
    const { schedule, start } = this;
    let tick = start;
    for (const instant of instantsBetween(schedule, start, start + schedule.cycle)) {
      this.move(instant.tick - tick);
      tick = instant.tick;
      this.sample(instant.compute);
      for (const channel of instant.deliver) this.deliver(channel, this.queues[channel].shift()!);
      for (const task of instant.compute) this.compute(task);
    }
    this.move(start + schedule.cycle - tick);
    return this.stateEquations();
  }

  private unit(column: number): Row {
    const row = new Float64Array(this.width);
    row[column] = 1;
    return row;
  }

  private slopes(rows: RowGroup, columns: keyof Cycle['rows']): Matrix {
    const key = `${rows} ${columns}`;
    let matrix = this.slopeCache.get(key);
    if (!matrix) {
      matrix = this.linearisation.slopes(rows, columns, this.evaluation);
      this.slopeCache.set(key, matrix);
    }
    return matrix;
  }

  private move(ticks: number): void {
    if (ticks === 0 || this.rows.state.length === 0) return;
    let move = this.moves.get(ticks);
    if (!move) {
      const held = this.slopes('derivative', 'held');
      const injected = this.slopes('derivative', 'injected');
      const input = zeros(held.rows, held.columns + injected.columns);
      place(input, held, 0, 0);
      place(input, injected, 0, held.columns);
      move = discretise(this.slopes('derivative', 'state'), input, ticks / this.schedule.ticksPerSecond);
      this.moves.set(ticks, move);
    }
    const { phi, gamma } = move;
    const inputs = [...this.rows.held, ...this.rows.injected];
    this.rows.state = this.rows.state.map((_, i) => {
      const row = new Float64Array(this.width);
      accumulate(row, phi, i, this.rows.state);
      accumulate(row, gamma, i, inputs);
      return row;
    });
  }

  /** A group of equations at this instant, only those that `wanted` picks. */
  private evaluate(
    group: RowGroup,
    wanted: (index: number) => boolean,
    columns: (keyof Cycle['rows'])[],
  ): Map<number, Row> {
    const result = new Map<number, Row>();
    for (let index = 0; index < this.linearisation.roots[group].length; index++) {
      if (!wanted(index)) continue;
      const row = new Float64Array(this.width);
      for (const column of columns) accumulate(row, this.slopes(group, column), index, this.rows[column]);
      result.set(index, row);
    }
    return result;
  }

  private sample(tasks: number[]): void {
    const { readings } = this.linearisation.loop;
    const sampled = this.evaluate('reading', (i) => tasks.includes(readings[i].task), [
      'state',
      'held',
      'injected',
    ]);
    for (const [i, row] of sampled) this.rows.reading[i] = row;
  }

  private deliver(channel: number, results: Row[]): void {
    this.linearisation.loop.held.forEach((held, i) => {
      if (held.channel === channel) this.rows.held[i] = results.shift()!;
    });
  }

  private compute(task: number): void {
    const { loop } = this.linearisation;
    this.inject(task);
    const from = ['reading', 'memory', 'held', 'injected'] as const;
    const memories = this.evaluate('memory', (i) => loop.memories[i].task === task, [...from]);
    const channels = this.schedule.channels.flatMap((channel, index) =>
      channel.task === task ? [index] : [],
    );
    const results = channels.map((channel) => [
      ...this.evaluate('held', (i) => loop.held[i].channel === channel, [...from]).values(),
    ]);
    channels.forEach((channel, i) => {
      if (this.schedule.channels[channel].delay > 0) this.queues[channel].push(results[i]);
      else this.deliver(channel, results[i]);
    });
    for (const [i, row] of memories) this.rows.memory[i] = row;
  }

  /**
   * Lets the consumers of the task's opened signals see their next injected values, and keeps what those signals would have
   * been: one that is computed from another at the same instant sees what is injected there.
   */
  private inject(task: number): void {
    const { openings } = this.linearisation.loop;
    const isOfTask = (index: number): boolean => openings[index].task === task;
    let next = this.known + this.returned.length;
    this.rows.injected = this.rows.injected.map((row, index) => (isOfTask(index) ? this.unit(next++) : row));
    const from = ['state', 'reading', 'memory', 'held', 'injected'] as const;
    for (const [index, row] of this.evaluate('returned', isOfTask, [...from])) {
      this.returned.push(row);
      this.returnedSizes.push(this.sizes[index]);
    }
  }

  private stateEquations(): StateEquations {
    const { state, held, memory, injected } = this.rows;
    const end = [...state, ...held, ...memory, ...injected, ...this.queues.flat(2)];
    const kept = influential(end, this.returned, this.known);
    const inputs = Array.from({ length: this.width - this.known }, (_, i) => this.known + i);
    const sizes = this.returnedSizes;
    const pick = (rows: Row[], columns: number[], factor: (i: number, j: number) => number): Matrix => {
      const matrix = zeros(rows.length, columns.length);
      rows.forEach((row, i) => {
        columns.forEach((column, j) => {
          matrix.data[i * columns.length + j] = factor(i, j) * row[column];
        });
      });
      return matrix;
    };
    const rows = kept.map((index) => end[index]);
    return stateEquations(
      pick(rows, kept, () => 1),
      pick(rows, inputs, (_, j) => sizes[j]),
      pick(this.returned, kept, (i) => -1 / sizes[i]),
      pick(this.returned, inputs, (i, j) => -sizes[j] / sizes[i]),
      this.schedule.cycle / this.schedule.ticksPerSecond,
    );
  }
}

function accumulate(target: Row, matrix: Matrix, index: number, rows: readonly Row[]): void {
  for (let j = 0; j < matrix.columns; j++) {
    const factor = matrix.data[index * matrix.columns + j];
    if (factor === 0) continue;
    const row = rows[j];
    for (let k = 0; k < target.length; k++) target[k] += factor * row[k];
  }
}

/** Results of a channel that are computed before a tick and delivered at or after it. */
function resultsUnderWay({ period, phase, channels }: Schedule, channel: number, tick: number): number {
  const { task, delay } = channels[channel];
  if (delay === 0) return 0;
  const computed = Math.ceil((tick - phase[task]) / period[task]);
  const delivered = Math.ceil((tick - phase[task] - delay) / period[task]);
  return computed - delivered;
}

/**
 * The values which the injection moves and which move what returns. The others take no part in this loop: a position that
 * nobody senses would otherwise stand in the result as an integrator.
 */
function influential(end: Row[], returned: Row[], known: number): number[] {
  const all = Array.from({ length: known }, (_, i) => i);
  const moved = spread(
    all.filter((i) => end[i].subarray(known).some((value) => value !== 0)),
    (i) => all.filter((j) => end[j][i] !== 0),
  );
  const moving = spread(
    all.filter((i) => returned.some((row) => row[i] !== 0)),
    (i) => all.filter((j) => end[i][j] !== 0),
  );
  return all.filter((i) => moved.has(i) && moving.has(i));
}

function spread(first: number[], next: (index: number) => number[]): Set<number> {
  const reached = new Set(first);
  for (const index of reached) for (const following of next(index)) reached.add(following);
  return reached;
}
