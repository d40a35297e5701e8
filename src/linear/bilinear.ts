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
