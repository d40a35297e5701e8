import type { ColumnGroup, Linearisation, RowGroup } from '../../linear/linearise.js';
import type { Schedule } from '../../loop/schedule.js';
import { isZero } from './interval.js';
import { isNothing, type Slope } from './slope.js';
import type { SlopeEvaluation } from './slope_evaluation.js';
import { combined, exponentialOver, zeroMatrix } from './slope_matrix.js';
import type { SlopeTiming } from './slope_timing.js';

/** State equations of a sampled loop transfer over a box: as `StateEquations`, each entry a quantity over the box. */
export interface SlopeLoop {
  a: Slope[][];
  b: Slope[];
  c: Slope[];
  d: Slope;
}

type Row = Slope[];
type Known = 'state' | 'held' | 'memory' | 'reading' | 'injected';

/**
 * The loop transfer over one cycle of the schedule, as `openedLoop` gives it for one plant, for every plant of a box at once
 * whose things happen in one order. The loop is opened at one signal, which changes once in the cycle.
 */
export function openedLoopOver(
  linearisation: Linearisation,
  timing: SlopeTiming,
  evaluation: SlopeEvaluation,
): SlopeLoop {
  return new SlopeCycle(linearisation, timing, evaluation).run();
}

class SlopeCycle {
  private readonly schedule: Schedule;
  private readonly known: number;
  private readonly rows: Record<Known, Row[]>;
  private readonly queues: Row[][][];
  private returned: Row = [];
  private readonly groups = new Map<string, Slope[][]>();
  private readonly moves = new Map<string, Slope[][]>();

  constructor(
    private readonly linearisation: Linearisation,
    private readonly timing: SlopeTiming,
    private readonly evaluation: SlopeEvaluation,
  ) {
    const { loop } = linearisation;
    this.schedule = timing.schedule;
    const underWay = this.schedule.channels.map((_, channel) => this.resultsUnderWay(channel));
    const heldBy = loop.channels.map((_, at) => loop.held.filter(({ channel }) => channel === at).length);
    this.known =
      loop.states.length +
      loop.held.length +
      loop.memories.length +
      1 +
      underWay.reduce((sum, count, channel) => sum + count * heldBy[channel], 0);
    let next = 0;
    const fresh = (count: number): Row[] => Array.from({ length: count }, () => this.unit(next++));
    this.rows = {
      state: fresh(loop.states.length),
      held: fresh(loop.held.length),
      memory: fresh(loop.memories.length),
      reading: loop.readings.map(() => this.nothing()),
      injected: fresh(1),
    };
    this.queues = underWay.map((count, channel) =>
      Array.from({ length: count }, () => fresh(heldBy[channel])),
    );
  }

  run(): SlopeLoop {
    const { instants, gaps } = this.timing;
    instants.forEach(({ compute, deliver }, i) => {
      this.move(gaps[i]);
      this.sample(compute);
      for (const channel of deliver) this.deliver(channel, this.queues[channel].shift()!);
      for (const task of compute) this.compute(task);
    });
    this.move(gaps[instants.length]);
    return this.result();
  }

  /** Results that are computed before the start of the cycle and delivered at or after it. */
  private resultsUnderWay(channel: number): number {
    const { start, schedule } = this.timing;
    const { period, phase, channels } = schedule;
    const { task, delay } = channels[channel];
    if (delay === 0) return 0;
    const computed = Math.ceil((start - phase[task]) / period[task]);
    return computed - Math.ceil((start - phase[task] - delay) / period[task]);
  }

  private nothing(): Row {
    return new Array<Slope>(this.known + 1).fill(this.evaluation.field.constant(0));
  }

  private unit(column: number): Row {
    return this.nothing().with(column, this.evaluation.field.constant(1));
  }

  private slopes(rows: RowGroup, columns: ColumnGroup, count: number): Slope[][] {
    const key = `${rows} ${columns}`;
    const found = this.groups.get(key);
    if (found) return found;
    const { field } = this.evaluation;
    const matrix = zeroMatrix(field, this.linearisation.roots[rows].length, count);
    for (const { row, column, slope } of this.linearisation.entries(rows, columns)) {
      matrix[row][column] = this.evaluation.of(slope);
    }
    this.groups.set(key, matrix);
    return matrix;
  }

  private move(seconds: Slope): void {
    const { state, held, injected } = this.rows;
    if (isNothing(seconds) || state.length === 0) return;
    const known = [...state, ...held, ...injected];
    // Gaps of like bounds are the same one where nothing moves them, and may be different ones else.
    const key = seconds.slopes.every(isZero) ? seconds.range.join() : `${this.moves.size}`;
    let transition = this.moves.get(key);
    if (!transition) {
      transition = this.transition(seconds, known.length);
      this.moves.set(key, transition);
    }
    this.rows.state = state.map((_, i) => combined(this.evaluation.field, transition[i], known));
  }

  /** exp of [[A, B], [0, 0]]·seconds: the states' rows give states from states, held values and the injection. */
  private transition(seconds: Slope, size: number): Slope[][] {
    const { field } = this.evaluation;
    const { state, held, injected } = this.rows;
    const parts = [
      this.slopes('derivative', 'state', state.length),
      this.slopes('derivative', 'held', held.length),
      this.slopes('derivative', 'injected', injected.length),
    ];
    const matrix = zeroMatrix(field, size, size).map((row, i) =>
      i < state.length
        ? parts.flatMap((part) => part[i].map((entry) => field.multiply(entry, seconds)))
        : row,
    );
    return exponentialOver(field, matrix);
  }

  private evaluate(group: RowGroup, wanted: (index: number) => boolean, columns: Known[]): Map<number, Row> {
    const result = new Map<number, Row>();
    const { field } = this.evaluation;
    for (let index = 0; index < this.linearisation.roots[group].length; index++) {
      if (!wanted(index)) continue;
      const factors = columns.flatMap((column) => {
        const rows = this.rows[column];
        return this.slopes(group, column, rows.length)[index];
      });
      const known = columns.flatMap((column) => this.rows[column]);
      result.set(index, known.length === 0 ? this.nothing() : combined(field, factors, known));
    }
    return result;
  }

  private sample(tasks: number[]): void {
    const { readings } = this.linearisation.loop;
    const from: Known[] = ['state', 'held', 'injected'];
    for (const [i, row] of this.evaluate('reading', (at) => tasks.includes(readings[at].task), from)) {
      this.rows.reading[i] = row;
    }
  }

  private deliver(channel: number, results: Row[]): void {
    this.linearisation.loop.held.forEach((held, i) => {
      if (held.channel === channel) this.rows.held[i] = results.shift()!;
    });
  }

  private compute(task: number): void {
    const { loop } = this.linearisation;
    if (loop.openings[0].task === task) this.inject();
    const from: Known[] = ['reading', 'memory', 'held', 'injected'];
    const memories = this.evaluate('memory', (i) => loop.memories[i].task === task, from);
    const channels = this.schedule.channels.flatMap((channel, at) => (channel.task === task ? [at] : []));
    const results = channels.map((channel) => [
      ...this.evaluate('held', (i) => loop.held[i].channel === channel, from).values(),
    ]);
    channels.forEach((channel, i) => {
      if (this.schedule.channels[channel].delay > 0) this.queues[channel].push(results[i]);
      else this.deliver(channel, results[i]);
    });
    for (const [i, row] of memories) this.rows.memory[i] = row;
  }

  private inject(): void {
    const from: Known[] = ['state', 'reading', 'memory', 'held', 'injected'];
    this.returned = this.evaluate('returned', () => true, from).get(0)!;
    this.rows.injected = [this.unit(this.known)];
  }

  private result(): SlopeLoop {
    const { field } = this.evaluation;
    const { state, held, memory, injected } = this.rows;
    const end = [...state, ...held, ...memory, ...injected, ...this.queues.flat(2)];
    const kept = influential(end, this.returned, this.known);
    return {
      a: kept.map((i) => kept.map((j) => end[i][j])),
      b: kept.map((i) => end[i][this.known]),
      c: kept.map((i) => field.negate(this.returned[i])),
      d: field.negate(this.returned[this.known]),
    };
  }
}

/** The values which the injection moves and which move what returns. */
function influential(end: Row[], returned: Row, known: number): number[] {
  const all = Array.from({ length: known }, (_, i) => i);
  const moved = spread(
    all.filter((i) => !isNothing(end[i][known])),
    (i) => all.filter((j) => !isNothing(end[j][i])),
  );
  const moving = spread(
    all.filter((i) => !isNothing(returned[i])),
    (i) => all.filter((j) => !isNothing(end[i][j])),
  );
  return all.filter((i) => moved.has(i) && moving.has(i));
}

function spread(first: number[], next: (index: number) => number[]): Set<number> {
  const reached = new Set(first);
  for (const index of reached) for (const following of next(index)) reached.add(following);
  return reached;
}
