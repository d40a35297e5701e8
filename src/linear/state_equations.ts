import { type Matrix, shape, zeros } from './matrix.js';

/**
 * A linear system in state equations. Sampled, with a period in s: x(k+1) = a·x(k) + b·u(k), y(k) = c·x(k) + d·u(k).
 * Continuous, with `period` undefined: x' = a·x + b·u, y = c·x + d·u. For n states, m inputs and p outputs `a` is
 * n × n, `b` n × m, `c` p × n and `d` p × m; n may be 0.
 */
export interface StateEquations {
  a: Matrix;
  b: Matrix;
  c: Matrix;
  d: Matrix;
  period: number | undefined;
}

/**
 * State equations after a check that the sizes fit and that the period is a positive number.
 * @param d feedthrough; zero when left out.
 * @throws RangeError which names the matrix that does not fit.
 */
export function stateEquations(
  a: Matrix,
  b: Matrix,
  c: Matrix,
  d: Matrix = zeros(c.rows, b.columns),
  period?: number,
): StateEquations {
  const n = a.rows;
  expectShape('a', a, n, n);
  expectShape('b', b, n, b.columns);
  expectShape('c', c, c.rows, n);
  expectShape('d', d, c.rows, b.columns);
  if (period !== undefined && !(period > 0 && Number.isFinite(period))) {
    throw new RangeError(`the sampling period is ${period} s, a positive number was expected`);
  }
  return { a, b, c, d, period };
}

function expectShape(name: string, matrix: Matrix, rows: number, columns: number): void {
  if (matrix.rows === rows && matrix.columns === columns) return;
  throw new RangeError(`matrix ${name} is ${shape(matrix)} where ${rows} x ${columns} was expected`);
}
