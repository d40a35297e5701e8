import { add, fromRows, type Matrix, multiply, scale } from './matrix.js';
import { NumericFailure } from './numeric_failure.js';
import { expectSingle } from './response.js';
import type { StateEquations } from './state_equations.js';

/**
 * The sensitivity 1/(1 + L) of a loop transfer L with one input and one output, closed with negative feedback.
 * @throws RangeError for several inputs or outputs, NumericFailure when 1 + d is zero: the loop then cannot be closed.
 */
export function sensitivityOf(loop: StateEquations): StateEquations {
  expectSingle(loop);
  const through = 1 / onePlusFeedthrough(loop);
  return {
    a: add(loop.a, multiply(loop.b, loop.c), -through),
    b: scale(loop.b, through),
    c: scale(loop.c, -through),
    d: fromRows([[through]]),
    period: loop.period,
  };
}

/**
 * The complementary sensitivity L/(1 + L) of a loop transfer L, with the same states as the sensitivity.
 * @throws as `sensitivityOf`.
 */
export function complementaryOf(loop: StateEquations): StateEquations {
  const sensitivity = sensitivityOf(loop);
  const through = loop.d.data[0] / onePlusFeedthrough(loop);
  return { ...sensitivity, c: scale(sensitivity.c, -1), d: fromRows([[through]]) };
}

/**
 * The state matrix of the closed loop, a − b·(1 + d)⁻¹·c, n × n.
 * @throws as `sensitivityOf`.
 */
export function closedLoopMatrix(loop: StateEquations): Matrix {
  return sensitivityOf(loop).a;
}

function onePlusFeedthrough(loop: StateEquations): number {
  const sum = 1 + loop.d.data[0];
  if (sum === 0)
    throw new NumericFailure('the loop cannot be closed: its feedthrough is -1, so 1 + L is zero at once');
  return sum;
}
