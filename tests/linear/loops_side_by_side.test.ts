import { describe, expect, it } from 'vitest';
import { GainLoci } from '../../src/linear/gain_loci.js';
import { liftedMargins, liftedSensitivity } from '../../src/linear/lifted_margins.js';
import { marginsOfLoop } from '../../src/linear/margins.js';
import { type Matrix, place, scale, zeros } from '../../src/linear/matrix.js';
import { polesOf } from '../../src/linear/poles.js';
import type { StateEquations } from '../../src/linear/state_equations.js';
import { randomLoop, repeatable } from './loops.js';

function apart(one: Matrix, other: Matrix): Matrix {
  const both = zeros(one.rows + other.rows, one.columns + other.columns);
  place(both, one, 0, 0);
  place(both, other, one.rows, one.columns);
  return both;
}

/** Two loops that know nothing of one another. */
const sideBySide = (one: StateEquations, other: StateEquations): StateEquations => ({
  a: apart(one.a, other.a),
  b: apart(one.b, other.b),
  c: apart(one.c, other.c),
  d: apart(one.d, other.d),
  period: one.period,
});

const stronger = (loop: StateEquations, by: number): StateEquations => ({
  ...loop,
  c: scale(loop.c, 1 + by),
  d: scale(loop.d, 1 + by),
});

function stepsOf(loop: StateEquations): number {
  const sensitivity = liftedSensitivity(loop);
  const features = [...polesOf(sensitivity.a, loop.period), ...polesOf(loop.a, loop.period)];
  return new GainLoci(sensitivity, features).steps.length;
}

// As of two like axes: their loci lie upon one another, or so near that they can hardly be told apart.
describe('two loops that are the same, or nearly', () => {
  it.each([0, 1e-13, 1e-9, 1e-6, 1e-3])('have the smaller of their margins, apart by a share of %f', (by) => {
    const random = repeatable(71);
    let judged = 0;
    for (let k = 0; k < 20; k++) {
      const one = randomLoop(1 + (k % 5), random);
      const other = stronger(one, by);
      const [its, others] = [marginsOfLoop(one), marginsOfLoop(other)];
      if (!its.stable || !others.stable) continue;
      judged++;
      const found = liftedMargins(sideBySide(one, other));
      expectNear(found.gainMargin.up, Math.min(its.gainMargin.up, others.gainMargin.up));
      expectNear(found.gainMargin.down, Math.max(its.gainMargin.down, others.gainMargin.down));
      expectNear(found.phaseMargin, Math.min(its.phaseMargin, others.phaseMargin));
      expectNear(found.modulusMargin, Math.min(its.modulusMargin, others.modulusMargin));
    }
    expect(judged).toBeGreaterThan(8);
  });

  it.each([0, 1e-13, 1e-9, 1e-6, 1e-3])('are followed in few steps, apart by a share of %f', (by) => {
    const random = repeatable(71);
    for (let k = 0; k < 20; k++) {
      const one = randomLoop(1 + (k % 5), random);
      if (!marginsOfLoop(one).stable) continue;
      expect(stepsOf(sideBySide(one, stronger(one, by))), `loop ${k}`).toBeLessThan(1000);
    }
  });
});

function expectNear(actual: number, expected: number): void {
  if (actual === expected) return;
  expect(Math.abs(actual / expected - 1), `${actual} for ${expected}`).toBeLessThan(1e-6);
}
