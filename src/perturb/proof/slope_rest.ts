import type { ColumnGroup, Linearisation, RowGroup } from '../../linear/linearise.js';
import { fromRows, identity, type Matrix, toRows } from '../../linear/matrix.js';
import { NumericFailure } from '../../linear/numeric_failure.js';
import type { PointOfRest } from '../../linear/point_of_rest.js';
import { solve } from '../../linear/solve.js';
import { type Interval, size, sum, up } from './interval.js';
import type { Slope, SlopeField } from './slope.js';
import { type SlopeEvaluation, Unprovable } from './slope_evaluation.js';
import { combined, multiplied, type SlopeMatrix } from './slope_matrix.js';

/** What keeps a value in a loop, in the order in which a point of rest is counted here. */
const kept = ['state', 'memory', 'held'] as const;
export type KeptGroup = (typeof kept)[number];

/** A quantity over a box for everything that keeps a value. */
export type KeptValues = Record<KeptGroup, readonly Slope[]>;

const mostRounds = 8;
/** How much wider than the last bounds the next ones are tried. */
const inflation = 1.2;
const rounding = 2 ** -46;

/**
 * Bounds within which every plant of a box has exactly one point of rest: with u at rest where F(u) = 0, it lies in
 * K = ũ − C·F(ũ) + (1 − C·F′(U))·(U − ũ), and is the only one in U, where K lies inside U (Krawczyk 1969).
 * @param centre the point of rest of the plant in the middle of the box.
 * @param at the loop's expressions over the box with these values.
 * @throws {Unprovable} where no such bounds are found: a value is free at rest, or the box is too wide.
 */
export function restOver(
  field: SlopeField,
  linearisation: Linearisation,
  centre: PointOfRest,
  at: (values: KeptValues) => SlopeEvaluation,
): KeptValues {
  const middle = kept.flatMap((group) => centre[group]);
  const split = (values: readonly Slope[]): KeptValues => {
    const { loop } = linearisation;
    const [n, m] = [loop.states.length, loop.memories.length];
    return { state: values.slice(0, n), memory: values.slice(n, n + m), held: values.slice(n + m) };
  };
  const fixed = middle.map((value) => field.constant(value));
  const atCentre = at(split(fixed));
  const inverse = constants(field, inverseOf(middles(slopesOf(field, linearisation, atCentre))));
  const residual = residualsOf(field, linearisation, atCentre, fixed);
  const step = combinedColumns(field, inverse, residual).map(({ range }): Interval => [-range[1], -range[0]]);
  let around = step.map((one, i) => inflated(one, middle[i]));
  for (let round = 0; round < mostRounds; round++) {
    const wide = around.map((one, i) => field.between(sum([middle[i], middle[i]], one)));
    const slopes = slopesOf(field, linearisation, at(split(wide)));
    const contraction = oneLess(field, multiplied(field, inverse, slopes));
    const moved = combinedColumns(
      field,
      contraction,
      around.map((one) => field.between(one)),
    );
    const next = step.map((one, i) => sum(one, moved[i].range));
    if (next.every(([low, high], i) => low > around[i][0] && high < around[i][1])) return split(wide);
    around = next.map((one, i) => inflated(one, middle[i]));
  }
  throw new Unprovable('no bounds were found within which every plant rests');
}

function inflated([low, high]: Interval, middle: number): Interval {
  const most = up(inflation * size([low, high]) + rounding * Math.abs(middle) + Number.MIN_VALUE);
  return [-most, most];
}

/** Rates, and by how much memories and held values change from one instant to the next. */
function residualsOf(
  field: SlopeField,
  { roots }: Linearisation,
  evaluation: SlopeEvaluation,
  values: readonly Slope[],
): Slope[] {
  const { derivative, memory, held } = roots;
  return [...derivative, ...memory, ...held].map((node, i) =>
    i < derivative.length ? evaluation.of(node) : field.subtract(evaluation.of(node), values[i]),
  );
}

/** Slopes of the residuals in what keeps a value, with the readings eliminated. */
function slopesOf(field: SlopeField, linearisation: Linearisation, evaluation: SlopeEvaluation): Slope[][] {
  const { loop, roots } = linearisation;
  const counts = { state: loop.states.length, memory: loop.memories.length, held: loop.held.length };
  const block = (rows: RowGroup, columns: ColumnGroup, count: number): Slope[][] => {
    const matrix = roots[rows].map(() => new Array<Slope>(count).fill(field.constant(0)));
    for (const { row, column, slope } of linearisation.entries(rows, columns)) {
      matrix[row][column] = evaluation.of(slope);
    }
    return matrix;
  };
  const direct = (rows: RowGroup): Slope[][] => {
    const blocks = kept.map((columns) => block(rows, columns, counts[columns]));
    return roots[rows].map((_, i) => blocks.flatMap((one) => one[i]));
  };
  const ofReadings = direct('reading');
  const whole = (rows: RowGroup): Slope[][] => {
    const factors = block(rows, 'reading', loop.readings.length);
    return direct(rows).map((row, i) => {
      const through = combined(field, factors[i], ofReadings);
      return row.map((entry, j) => (through[j] ? field.add(entry, through[j]) : entry));
    });
  };
  const repeats = (rows: Slope[][], from: number): Slope[][] =>
    rows.map((row, i) => row.with(from + i, field.subtract(row[from + i], field.constant(1))));
  return [
    ...whole('derivative'),
    ...repeats(whole('memory'), counts.state),
    ...repeats(whole('held'), counts.state + counts.memory),
  ];
}

/** @throws {Unprovable} for a singular matrix. */
function inverseOf(matrix: Matrix): Matrix {
  try {
    return solve(matrix, identity(matrix.rows));
  } catch (error) {
    if (error instanceof NumericFailure) throw new Unprovable('some value of the loop is free at rest');
    throw error;
  }
}

function middles(matrix: SlopeMatrix): Matrix {
  return fromRows(matrix.map((row) => row.map(({ centre: [low, high] }) => low + (high - low) / 2)));
}

function constants(field: SlopeField, matrix: Matrix): Slope[][] {
  return toRows(matrix).map((row) => row.map((value) => field.constant(value)));
}

function oneLess(field: SlopeField, matrix: SlopeMatrix): Slope[][] {
  return matrix.map((row, i) =>
    row.map((entry, j) => field.subtract(field.constant(Number(i === j)), entry)),
  );
}

function combinedColumns(field: SlopeField, matrix: SlopeMatrix, column: readonly Slope[]): Slope[] {
  return multiplied(
    field,
    matrix,
    column.map((entry) => [entry]),
  ).map(([entry]) => entry);
}
