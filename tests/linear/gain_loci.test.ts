import { describe, expect, it } from 'vitest';
import { GainLoci } from '../../src/linear/gain_loci.js';
import { liftedMargins } from '../../src/linear/lifted_margins.js';
import { add, fromRows, identity, multiply, place, scale, zeros } from '../../src/linear/matrix.js';
import { polesOf } from '../../src/linear/poles.js';
import { solve } from '../../src/linear/solve.js';
import type { StateEquations } from '../../src/linear/state_equations.js';
import { repeatable } from './loops.js';

const samples = 10;

/**
 * A fast law, ten times a cycle, inside a slow one, once a cycle, opened at the fast law's output. States: plant, integral of
 * the fast law, its target, which the slow law sums up. The fast law asks for gain·(target − plant) + integral.
 */
function cascade(pole: number, gain: number, slow: number): StateEquations {
  const output = fromRows([[gain, -1, -gain]]);
  const entered = fromRows([[1 - pole], [0], [0]]);
  const moves = (sums: number) =>
    fromRows([
      [pole, 0, 0],
      [-0.1 * gain, 1, 0.1 * gain],
      [-sums, 0, 1],
    ]);
  let a = identity(3);
  const b = zeros(3, samples);
  const c = zeros(samples, 3);
  const d = zeros(samples, samples);
  for (let i = 0; i < samples; i++) {
    place(c, multiply(output, a), i, 0);
    place(d, multiply(output, b), i, 0);
    const move = moves(i === 0 ? slow : 0);
    place(b, multiply(move, b), 0, 0);
    place(b, entered, 0, i);
    a = multiply(move, a);
  }
  return { a, b, c, d, period: samples };
}

function closed({ a, b, c, d, period }: StateEquations, factor: number): StateEquations {
  const closing = solve(add(identity(samples), d, factor), identity(samples));
  return {
    a: add(a, multiply(multiply(b, closing), c), -factor),
    b: multiply(b, closing),
    c: scale(multiply(closing, c), -1),
    d: closing,
    period,
  };
}

/** The largest |z| of the loop closed with a factor on every change. */
function largestPole(loop: StateEquations, factor: number): number {
  const poles = polesOf(closed(loop, factor).a, samples);
  return Math.max(...poles.map(({ real, imaginary }) => Math.hypot(1 + real, imaginary)));
}

function loops(): StateEquations[] {
  const random = repeatable(11);
  return Array.from({ length: 15 }, () =>
    cascade(0.5 + 0.4 * random(), 0.3 + 2 * random(), 0.05 + 0.5 * random()),
  );
}

/** Integrators give an eigenvalue without bound near zero frequency, where its angle is nothing but rounding. */
describe('a lifted loop with integrators', () => {
  it('is stable up to its gain margin and no farther, as the poles of the closed loop say', () => {
    let judged = 0;
    for (const [k, loop] of loops().entries()) {
      const { stable, gainMargin } = liftedMargins(loop);
      expect(stable).toBe(largestPole(loop, 1) < 1);
      if (!stable) continue;
      const { up } = gainMargin;
      for (const share of [0.1, 0.3, 0.5, 0.7, 0.9, 0.999]) {
        const within = Number.isFinite(up) ? 1 + share * (up - 1) : 1 + 9 * share;
        expect(largestPole(loop, within), `loop ${k}, ${within} of ${up}`).toBeLessThan(1);
      }
      if (!Number.isFinite(up)) continue;
      expect(largestPole(loop, 1.001 * up), `loop ${k}, beyond ${up}`).toBeGreaterThan(1);
      judged++;
    }
    expect(judged).toBeGreaterThan(7);
  });

  it('is followed in few steps, not down to the noise of what has no bound', () => {
    for (const loop of loops().filter((one) => largestPole(one, 1) < 1)) {
      const sensitivity = closed(loop, 1);
      const features = [...polesOf(loop.a, samples), ...polesOf(sensitivity.a, samples)];
      expect(new GainLoci(sensitivity, features).steps.length).toBeLessThan(15_000);
    }
  });
});
