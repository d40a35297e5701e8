import { Evaluation, type LeafValues } from '../loop/evaluate.js';
import { instantsBetween, type Schedule } from '../loop/schedule.js';
import { type Known, type KnownRows, type RowArithmetic, settledStart, walkCycle } from './cycle_walk.js';
import { discretise } from './exponential.js';
import type { Linearisation, RowGroup } from './linearise.js';
import { type Matrix, place, zeros } from './matrix.js';
import { type StateEquations, stateEquations } from './state_equations.js';

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
  const start = settledStart(schedule);
  const end = start + schedule.cycle;
  const instants = instantsBetween(schedule, start, end);
  const ticks = [start, ...instants.map(({ tick }) => tick), end];
  const seconds = ticks.slice(1).map((tick, i) => (tick - ticks[i]) / schedule.ticksPerSecond);
  const numbers = new NumberRows(linearisation, new Evaluation(leaves, 'off'), seconds);
  const walked = walkCycle(linearisation.loop, { schedule, start, instants }, numbers);
  const kept = walked.influential;
  const rows = kept.map((index) => walked.end[index]);
  const returned = walked.returned.map(({ row }) => row);
  const inputs = returned.map((_, i) => walked.known + i);
  const sizeOf = (i: number): number => sizes[walked.returned[i].opening];
  return stateEquations(
    picked(rows, kept, () => 1),
    picked(rows, inputs, (_, j) => sizeOf(j)),
    picked(returned, kept, (i) => -1 / sizeOf(i)),
    picked(returned, inputs, (i, j) => -sizeOf(j) / sizeOf(i)),
    schedule.cycle / schedule.ticksPerSecond,
  );
}

function picked(
  rows: readonly Float64Array[],
  columns: readonly number[],
  factor: (i: number, j: number) => number,
): Matrix {
  const matrix = zeros(rows.length, columns.length);
  rows.forEach((row, i) => {
    columns.forEach((column, j) => {
      matrix.data[i * columns.length + j] = factor(i, j) * row[column];
    });
  });
  return matrix;
}

/** Rows of numbers, for one plant. */
class NumberRows implements RowArithmetic<Float64Array> {
  private readonly slopesOf = new Map<string, Matrix>();
  private readonly moves = new Map<number, { phi: Matrix; gamma: Matrix }>();

  /** @param gaps how long the gaps between instants are, s. */
  constructor(
    private readonly linearisation: Linearisation,
    private readonly evaluation: Evaluation,
    private readonly gaps: readonly number[],
  ) {}

  nothing(width: number): Float64Array {
    return new Float64Array(width);
  }

  unit(width: number, column: number): Float64Array {
    const row = new Float64Array(width);
    row[column] = 1;
    return row;
  }

  isNothing(row: Float64Array, column: number): boolean {
    return row[column] === 0;
  }

  equation(
    group: RowGroup,
    index: number,
    from: readonly Known[],
    rows: KnownRows<Float64Array>,
  ): Float64Array {
    const row = new Float64Array(rows.injected[0].length);
    for (const columns of from) accumulate(row, this.slopes(group, columns), index, rows[columns]);
    return row;
  }

  moved(gap: number, { state, held, injected }: KnownRows<Float64Array>): Float64Array[] {
    const seconds = this.gaps[gap];
    if (seconds === 0 || state.length === 0) return state;
    let move = this.moves.get(seconds);
    if (!move) {
      move = discretise(this.slopes('derivative', 'state'), this.inputs(), seconds);
      this.moves.set(seconds, move);
    }
    const { phi, gamma } = move;
    const inputs = [...held, ...injected];
    return state.map((old, i) => {
      const row = new Float64Array(old.length);
      accumulate(row, phi, i, state);
      accumulate(row, gamma, i, inputs);
      return row;
    });
  }

  /** Slopes of the rates in what is constant between instants. */
  private inputs(): Matrix {
    const held = this.slopes('derivative', 'held');
    const injected = this.slopes('derivative', 'injected');
    const both = zeros(held.rows, held.columns + injected.columns);
    place(both, held, 0, 0);
    place(both, injected, 0, held.columns);
    return both;
  }

  private slopes(rows: RowGroup, columns: Known): Matrix {
    const key = `${rows} ${columns}`;
    let matrix = this.slopesOf.get(key);
    if (!matrix) {
      matrix = this.linearisation.slopes(rows, columns, this.evaluation);
      this.slopesOf.set(key, matrix);
    }
    return matrix;
  }
}

function accumulate(
  target: Float64Array,
  matrix: Matrix,
  index: number,
  rows: readonly Float64Array[],
): void {
  for (let j = 0; j < matrix.columns; j++) {
    const factor = matrix.data[index * matrix.columns + j];
    if (factor === 0) continue;
    const row = rows[j];
    for (let k = 0; k < target.length; k++) target[k] += factor * row[k];
  }
}
