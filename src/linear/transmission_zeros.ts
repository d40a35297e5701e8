import type { Complex } from './complex.js';
import { eigenvalues } from './eigenvalues.js';
import { add, euclideanNorm, identity, type Matrix, multiply } from './matrix.js';
import { NumericFailure } from './numeric_failure.js';
import { solve } from './solve.js';
import type { StateEquations } from './state_equations.js';

/**
 * The finite zeros of a system with one input and one output, for a sampled system each less one, z − 1, as `polesOf`
 * gives the poles. They are found as eigenvalues of the inverse system after the change of variable w = 1/(p − p₀), which
 * has a feedthrough for nearly every p₀: exact enough to say where a response changes quickly.
 * @param size a typical distance of the poles from 0, which sets the choices of p₀.
 * @returns an empty list when the response is zero, or when none of the choices is regular.
 */
export function transmissionZeros(system: StateEquations, size: number): Complex[] {
  const n = system.a.rows;
  if (n === 0) return [];
  const shift = system.period === undefined ? 0 : 1;
  let best: Inverse | undefined;
  for (const share of CENTRES) {
    const centre = share * size;
    const found = inverseAbout(system, centre + shift, centre);
    if (found && (best === undefined || found.regularity > best.regularity)) best = found;
    if (best && best.regularity > GOOD) break;
  }
  if (best === undefined) return [];
  const { centre } = best;
  return eigenvalues(best.a)
    .filter((w) => Math.hypot(w.real, w.imaginary) * size > NEGLIGIBLE)
    .map(({ real, imaginary }) => {
      const square = real * real + imaginary * imaginary;
      return { real: centre + real / square, imaginary: -imaginary / square };
    });
}

const CENTRES = [1.37, -2.61, 0.43, -0.29];
const GOOD = 1e-3;
/** Zeros farther away than this many typical distances are as good as infinite. */
const NEGLIGIBLE = 1e-6;

interface Inverse {
  a: Matrix;
  centre: number;
  /** Size of the response at the centre against the size of its parts: near 0 when they cancel. */
  regularity: number;
}

function inverseAbout(system: StateEquations, point: number, centre: number): Inverse | undefined {
  try {
    const f = solve(add(system.a, identity(system.a.rows), -point), identity(system.a.rows));
    const fb = multiply(f, system.b);
    const cf = multiply(system.c, f);
    const through = system.d.data[0] - multiply(system.c, fb).data[0];
    const parts = Math.abs(system.d.data[0]) + euclideanNorm(cf.data) * euclideanNorm(system.b.data);
    if (!(Math.abs(through) > 0)) return undefined;
    return { a: add(f, multiply(fb, cf), 1 / through), centre, regularity: Math.abs(through) / parts };
  } catch (error) {
    if (error instanceof NumericFailure) return undefined;
    throw error;
  }
}
