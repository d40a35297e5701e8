import { sweepOf } from './frequency_sweep.js';
import { NumericFailure } from './numeric_failure.js';
import { polesOf } from './poles.js';
import { expectSingle } from './response.js';
import type { StateEquations } from './state_equations.js';
import { zerosOver } from './sweep_zeros.js';
import { transmissionZeros } from './transmission_zeros.js';

/**
 * The bandwidth in rad/s of a response with one input and one output: the first frequency at which its size falls to
 * 1/√2 of its value at zero frequency; Infinity when it never does (for a sampled system: up to half the sampling
 * frequency). Of a loop transfer L it is taken on the closed loop, `complementaryOf(L)`.
 * @throws RangeError for several inputs or outputs, NumericFailure when the value at zero frequency is zero or infinite.
 */
export function bandwidthOf(system: StateEquations): number {
  expectSingle(system);
  const poles = polesOf(system.a, system.period);
  const size = Math.max(0, ...poles.map(({ real, imaginary }) => Math.hypot(real, imaginary))) || 1;
  const sweep = sweepOf(system, [...poles, ...transmissionZeros(system, size)]);
  const [dr, di, nr, ni] = sweep.parts;
  const staticSquare = (nr * nr + ni * ni) / (dr * dr + di * di);
  if (!(staticSquare > 0 && Number.isFinite(staticSquare))) {
    throw new NumericFailure(
      `there is no bandwidth: the response at zero frequency is ${Math.sqrt(staticSquare)}, a finite value other than 0 was expected`,
    );
  }
  const excess = (p: Float64Array, at: number): number => {
    const above = p[at + 2] * p[at + 2] + p[at + 3] * p[at + 3];
    const bar = (staticSquare / 2) * (p[at] * p[at] + p[at + 1] * p[at + 1]);
    return above + bar === 0 ? 0 : (above - bar) / (above + bar);
  };
  return zerosOver(sweep, excess, 0, sweep.frequencies.length - 1)[0] ?? Number.POSITIVE_INFINITY;
}
