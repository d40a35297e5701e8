import type { ClosedLoopRatio } from './loop_response.js';
import { add, identity, multiply, scale } from './matrix.js';
import { solve } from './solve.js';
import type { StateEquations } from './state_equations.js';

/**
 * (I + L)⁻¹ = I − (I + L)⁻¹·L in state equations, of a lifted L.
 * @throws NumericFailure when the loop cannot be closed.
 */
export function liftedSensitivity(loop: StateEquations): StateEquations {
  const { a, b, c, d, period } = loop;
  const closing = solve(add(identity(d.rows), d), identity(d.rows));
  const entered = multiply(b, closing);
  return {
    a: add(a, multiply(entered, c), -1),
    b: entered,
    c: scale(multiply(closing, c), -1),
    d: closing,
    period,
  };
}

/** A response of the closed loop, unitWeight·S + loopWeight·(I − S), of a lifted L. @throws as `liftedSensitivity`. */
export function liftedResponse(
  loop: StateEquations,
  { loopWeight, unitWeight }: ClosedLoopRatio,
): StateEquations {
  const sensitivity = liftedSensitivity(loop);
  const factor = unitWeight - loopWeight;
  return {
    ...sensitivity,
    c: scale(sensitivity.c, factor),
    d: add(scale(identity(sensitivity.d.rows), loopWeight), sensitivity.d, factor),
  };
}
