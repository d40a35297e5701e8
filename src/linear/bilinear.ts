import { add, identity, multiply, scale } from './matrix.js';
import { solve } from './solve.js';
import type { StateEquations } from './state_equations.js';

/**
 * The continuous system with the same response at s = (2/T)·(z − 1)/(z + 1), T being the sampling period (Tustin, 1947).
 * The unit circle goes over into the imaginary axis, the angle ωT into the frequency (2/T)·tan(ωT/2); gains and stability
 * are kept.
 * @throws RangeError for a continuous system, NumericFailure when there is a pole at z = −1.
 */
export function continuousImage(system: StateEquations): StateEquations {
  if (system.period === undefined) throw new RangeError('a continuous system has no continuous image');
  const rate = 2 / system.period;
  const one = identity(system.a.rows);
  const plus = add(system.a, one);
  const entered = solve(plus, system.b);
  return {
    a: scale(solve(plus, add(system.a, one, -1)), rate),
    b: scale(entered, Math.sqrt(2 * rate)),
    c: scale(multiply(system.c, solve(plus, one)), Math.sqrt(2 * rate)),
    d: add(system.d, multiply(system.c, entered), -1),
    period: undefined,
  };
}

/**
 * The sampled system which a continuous one becomes by the trapezoidal rule: s is replaced by w·(z − 1)/(z + 1) with
 * w = 2/T (Tustin, 1947), or with w = ω/tan(ωT/2) so that the two responses are equal at the frequency ω.
 * @param period s
 * @param matchFrequency ω in rad/s, below half the sampling frequency; equal at low frequencies when left out.
 * @throws RangeError when the system is sampled or the frequency out of range, NumericFailure for a pole at s = w.
 */
export function trapezoidalEquivalent(
  system: StateEquations,
  period: number,
  matchFrequency?: number,
): StateEquations {
  if (system.period !== undefined) throw new RangeError('a sampled system cannot be sampled again');
  const rate =
    matchFrequency === undefined ? 2 / period : matchFrequency / Math.tan((matchFrequency * period) / 2);
  if (!(rate > 0)) {
    throw new RangeError(
      `${matchFrequency} rad/s is not between 0 and half the sampling frequency, ${Math.PI / period}`,
    );
  }
  const one = identity(system.a.rows);
  const minus = add(scale(one, rate), system.a, -1);
  const entered = solve(minus, system.b);
  return {
    a: solve(minus, add(scale(one, rate), system.a)),
    b: scale(entered, Math.sqrt(2 * rate)),
    c: scale(multiply(system.c, solve(minus, one)), Math.sqrt(2 * rate)),
    d: add(system.d, multiply(system.c, entered)),
    period,
  };
}
