import { discretise } from '../../src/linear/exponential.js';
import { identity, multiply, place, zeros } from '../../src/linear/matrix.js';
import type { StateEquations } from '../../src/linear/state_equations.js';

/**
 * The sampled equivalent of a continuous system behind a zero-order hold, exact at the sampling instants, with a delay
 * between the instant and the moment at which the held input changes (Åström and Wittenmark, 1984). The states are those of
 * the system and then the inputs of the last instants, newest first: as many as the delay reaches back over. The output is
 * taken at the instant, after an input that changes there.
 * @param period s
 * @param delay s, 0 or more; it need not be a whole number of periods. A delay within 1e-12 periods of a whole number counts
 * as that number.
 * @throws RangeError when the system is already sampled, the period not positive or the delay negative.
 */
export function holdEquivalent(system: StateEquations, period: number, delay = 0): StateEquations {
  if (system.period !== undefined) throw new RangeError('a sampled system cannot be sampled again');
  if (!(period > 0 && delay >= 0)) {
    throw new RangeError(
      `a period of ${period} s and a delay of ${delay} s were given: expected above 0, and 0 or more`,
    );
  }
  const { whole, rest } = wholePeriods(period, delay);
  const before = discretise(system.a, system.b, rest);
  const after = discretise(system.a, system.b, period - rest);
  const n = system.a.rows;
  const m = system.b.columns;
  const kept = whole + (rest > 0 ? 1 : 0);
  const a = zeros(n + kept * m, n + kept * m);
  const b = zeros(n + kept * m, m);
  const c = zeros(system.c.rows, n + kept * m);
  place(a, multiply(after.phi, before.phi), 0, 0);
  // The input `whole` instants back acts after the change, the one before it until then.
  if (whole > 0) place(a, after.gamma, 0, n + (whole - 1) * m);
  else place(b, after.gamma, 0, 0);
  if (rest > 0) place(a, multiply(after.phi, before.gamma), 0, n + whole * m);
  if (kept > 0) place(b, identity(m), n, 0);
  for (let k = 1; k < kept; k++) place(a, identity(m), n + k * m, n + (k - 1) * m);
  place(c, system.c, 0, 0);
  if (kept === 0) return { a, b, c, d: system.d, period };
  place(c, system.d, 0, n + (kept - 1) * m);
  return { a, b, c, d: zeros(system.c.rows, m), period };
}

function wholePeriods(period: number, delay: number): { whole: number; rest: number } {
  const nearest = Math.round(delay / period);
  if (Math.abs(delay / period - nearest) < 1e-12) return { whole: nearest, rest: 0 };
  const whole = Math.floor(delay / period);
  return { whole, rest: delay - whole * period };
}
