import { type Known, type KnownRows, type RowArithmetic, walkCycle } from '../../linear/cycle_walk.js';
import type { Linearisation, RowGroup } from '../../linear/linearise.js';
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

/**
 * The loop transfer over one cycle of the schedule, as `openedLoop` gives it for one plant, for every plant of a box at once
 * whose things happen in one order. The loop is opened at one signal, which changes once in the cycle.
 */
export function openedLoopOver(
  linearisation: Linearisation,
  timing: SlopeTiming,
  evaluation: SlopeEvaluation,
): SlopeLoop {
  const { field } = evaluation;
  const slopes = new SlopeRows(linearisation, evaluation, timing.gaps);
  const { end, returned, known, influential } = walkCycle(linearisation.loop, timing, slopes);
  const [{ row }] = returned;
  return {
    a: influential.map((i) => influential.map((j) => end[i][j])),
    b: influential.map((i) => end[i][known]),
    c: influential.map((i) => field.negate(row[i])),
    d: field.negate(row[known]),
  };
}

type Row = Slope[];

/** Rows of quantities over a box. */
class SlopeRows implements RowArithmetic<Row> {
  private readonly groups = new Map<string, Slope[][]>();
  private readonly moves = new Map<string, Slope[][]>();

  /** @param gaps how long the gaps between instants are, s. */
  constructor(
    private readonly linearisation: Linearisation,
    private readonly evaluation: SlopeEvaluation,
    private readonly gaps: readonly Slope[],
  ) {}

  nothing(width: number): Row {
    return new Array<Slope>(width).fill(this.evaluation.field.constant(0));
  }

  unit(width: number, column: number): Row {
    return this.nothing(width).with(column, this.evaluation.field.constant(1));
  }

  isNothing(row: Row, column: number): boolean {
    return isNothing(row[column]);
  }

  equation(group: RowGroup, index: number, from: readonly Known[], rows: KnownRows<Row>): Row {
    const factors = from.flatMap((columns) => this.slopes(group, columns, rows[columns].length)[index]);
    return combined(
      this.evaluation.field,
      factors,
      from.flatMap((columns) => rows[columns]),
    );
  }

  moved(gap: number, { state, held, injected }: KnownRows<Row>): Row[] {
    const seconds = this.gaps[gap];
    if (isNothing(seconds) || state.length === 0) return state;
    // Gaps of like bounds are the same one where nothing moves them, and may be different ones else.
    const key = seconds.slopes.every(isZero) ? seconds.range.join() : `gap ${gap}`;
    let transition = this.moves.get(key);
    if (!transition) {
      transition = this.transition(seconds, [state.length, held.length, injected.length]);
      this.moves.set(key, transition);
    }
    const known = [...state, ...held, ...injected];
    const rows = transition;
    return state.map((_, i) => combined(this.evaluation.field, rows[i], known));
  }

  /** exp of [[A, B], [0, 0]]·seconds: the states' rows give states from states, held values and the injection. */
  private transition(seconds: Slope, [states, held, injected]: [number, number, number]): Slope[][] {
    const { field } = this.evaluation;
    const parts = [
      this.slopes('derivative', 'state', states),
      this.slopes('derivative', 'held', held),
      this.slopes('derivative', 'injected', injected),
    ];
    const size = states + held + injected;
    const matrix = zeroMatrix(field, size, size).map((row, i) =>
      i < states ? parts.flatMap((part) => part[i].map((entry) => field.multiply(entry, seconds))) : row,
    );
    return exponentialOver(field, matrix);
  }

  private slopes(rows: RowGroup, columns: Known, count: number): Slope[][] {
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
}
