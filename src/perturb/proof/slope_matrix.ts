import { everything, type Interval, size, sum, up } from './interval.js';
import { isNothing, type Slope, type SlopeField } from './slope.js';

/** A matrix of quantities over a box, by rows. */
export type SlopeMatrix = readonly (readonly Slope[])[];

/** A matrix of zeros by making. */
export function zeroMatrix(field: SlopeField, rows: number, columns: number): Slope[][] {
  const zero = field.constant(0);
  return Array.from({ length: rows }, () => new Array<Slope>(columns).fill(zero));
}

/** Ones on the diagonal, zeros by making elsewhere. */
export function identityMatrix(field: SlopeField, size: number): Slope[][] {
  const one = field.constant(1);
  return zeroMatrix(field, size, size).map((row, i) => row.with(i, one));
}

/** The product; zeros by making stay zeros. */
export function multiplied(field: SlopeField, a: SlopeMatrix, b: SlopeMatrix): Slope[][] {
  return a.map((row) => combined(field, row, b));
}

/** Σ factor·row over the rows of a matrix. */
export function combined(field: SlopeField, factors: readonly Slope[], rows: SlopeMatrix): Slope[] {
  const columns = rows[0]?.length ?? 0;
  const result = new Array<Slope>(columns).fill(field.constant(0));
  factors.forEach((factor, k) => {
    if (isNothing(factor)) return;
    for (let j = 0; j < columns; j++) {
      if (!isNothing(rows[k][j])) result[j] = field.add(result[j], field.multiply(factor, rows[k][j]));
    }
  });
  return result;
}

const terms = 14;

/**
 * The exponential of a matrix by its series with the rest bounded, after halving it until its norm is at most a half, and
 * squaring back.
 */
export function exponentialOver(field: SlopeField, matrix: SlopeMatrix): Slope[][] {
  const norm = normOf(matrix.map((row) => row.map(largest)));
  const halvings = Math.max(0, Math.ceil(Math.log2(norm)) + 1);
  if (!Number.isFinite(halvings) || halvings > 60)
    return matrix.map((row) => row.map(() => field.between(everything)));
  const scale = field.constant(2 ** -halvings);
  const small = matrix.map((row) => row.map((entry) => field.multiply(entry, scale)));
  let result = identityMatrix(field, matrix.length);
  for (let k = terms; k >= 1; k--) {
    const step = field.constant(k);
    const scaled = small.map((row) => row.map((entry) => field.divide(entry, step)));
    result = plusIdentity(field, multiplied(field, scaled, result));
  }
  result = withRest(field, small, result);
  for (let k = 0; k < halvings; k++) result = multiplied(field, result, result);
  return result;
}

function plusIdentity(field: SlopeField, matrix: Slope[][]): Slope[][] {
  const one = field.constant(1);
  return matrix.map((row, i) => row.with(i, field.add(row[i], one)));
}

/**
 * Adds what the series leaves out: Σ‖M‖ᵏ/k! from k = terms + 1 on, at most ‖M‖^(terms+1)/(terms+1)! times 1/(1 − ‖M‖), and
 * for its slopes ‖dM‖·‖M‖^terms/terms! times the same.
 */
function withRest(field: SlopeField, matrix: SlopeMatrix, result: Slope[][]): Slope[][] {
  const norm = normOf(matrix.map((row) => row.map(largest)));
  const tail = up(up(norm ** terms / factorial(terms)) * 2.1);
  const rest = up(tail * norm);
  const restOfSlopes = field.box.map((_, i) =>
    up(tail * normOf(matrix.map((row) => row.map(({ slopes }) => size(slopes[i]))))),
  );
  const widen = (interval: Interval, by: number): Interval => sum(interval, [-by, by]);
  return result.map((row) =>
    row.map((entry) =>
      // No path of fewer steps than the series has terms leads there: then none does.
      isNothing(entry) && matrix.length <= terms
        ? entry
        : {
            range: widen(entry.range, rest),
            centre: widen(entry.centre, rest),
            slopes: entry.slopes.map((slope, i) => widen(slope, restOfSlopes[i])),
          },
    ),
  );
}

/** The bounds may hold for a part of the box alone, in which the centre does not lie; the series must hold for both. */
function largest({ range, centre }: Slope): number {
  return Math.max(size(range), size(centre));
}

/** The largest sum of sizes in a row. */
function normOf(sizes: readonly (readonly number[])[]): number {
  return sizes.reduce(
    (most, row) =>
      Math.max(
        most,
        row.reduce((total, one) => up(total + one), 0),
      ),
    0,
  );
}

function factorial(n: number): number {
  return n <= 1 ? 1 : n * factorial(n - 1);
}
