import fc from 'fast-check';
import { describe, expect, it } from 'vitest';
import { delayedLoop } from '../../src/linear/lifted_delay.js';
import { liftedMargins } from '../../src/linear/lifted_margins.js';
import { liftedSensitivity } from '../../src/linear/lifted_response.js';
import { marginsOfLoop } from '../../src/linear/margins.js';
import { polesOf } from '../../src/linear/poles.js';
import type { StateEquations } from '../../src/linear/state_equations.js';
import { alternating, inSeries, lifted, loopOf, randomLoop, repeatable, times } from './loops.js';

/** The poles of the closed loop over a cycle with every change delayed by so many, the largest first. */
function polesWith(loop: StateEquations, delay: number): { size: number; imaginary: number }[] {
  const delayed = delay === 0 ? loop : delayedLoop(loop, delay);
  return polesOf(liftedSensitivity(delayed).a, loop.period)
    .map(({ real, imaginary }) => ({ size: Math.hypot(1 + real, imaginary), imaginary }))
    .sort((one, other) => other.size - one.size);
}

function largestPole(loop: StateEquations, delay: number): number {
  return polesWith(loop, delay)[0].size;
}

/** The factor on all changes, from a stable one down, with which the loop delayed by so many is at the edge of stability. */
function factorAtEdge(loop: StateEquations, delay: number): number | undefined {
  let [stable, unstable] = [1e-3, 1];
  if (largestPole(times(loop, stable), delay) >= 1 || largestPole(times(loop, unstable), delay) < 1) {
    return undefined;
  }
  for (let round = 0; round < 60; round++) {
    const middle = Math.sqrt(stable * unstable);
    if (largestPole(times(loop, middle), delay) < 1) stable = middle;
    else unstable = middle;
  }
  return stable;
}

describe('a loop of one rate seen over a longer cycle', () => {
  it('has the delay margin of the loop itself', () => {
    const random = repeatable(5);
    let judged = 0;
    for (let k = 0; k < 30; k++) {
      const loop = randomLoop(1 + (k % 6), random);
      const own = marginsOfLoop(loop);
      if (!own.stable) continue;
      judged++;
      const { delayMargin } = liftedMargins(lifted(loop, 2 + (k % 5)));
      if (delayMargin === own.delayMargin) continue;
      expect(Math.abs(delayMargin / own.delayMargin - 1), `loop ${k}`).toBeLessThan(1e-9);
    }
    expect(judged).toBeGreaterThan(12);
  });

  it('has no delay margin where it is unstable', () => {
    expect(liftedMargins(lifted(loopOf([2.5], [1, -1], 1), 3)).delayMargin).toBe(0);
  });
});

describe('a loop whose gain differs from sample to sample', () => {
  it('has a delay margin of whole changes where a delay of so many brings it to the edge, as poles say', () => {
    let [judged, exactly] = [0, 0];
    for (let seed = 0; seed < 150; seed++) {
      const changes = 2 + (seed % 4);
      const loop = alternating(1 + (seed % 4), changes, repeatable(seed));
      const delay = 1 + (seed % 3);
      const factor = factorAtEdge(loop, delay);
      if (factor === undefined) continue;
      const atEdge = times(loop, factor);
      // With less delay the poles must be well inside, so that this is where the loop first becomes unstable.
      const before = Array.from({ length: delay }, (_, k) => largestPole(atEdge, k));
      if (before.some((size) => size > 1 - 1e-7)) continue;
      // At half the sampling frequency a whole delay only touches the edge.
      if (Math.abs(polesWith(atEdge, delay)[0].imaginary) < 1e-6) continue;
      const { delayMargin } = liftedMargins(atEdge);
      judged++;
      const found = (delayMargin / loop.period!) * changes;
      // It may be unstable between whole delays before, and come back.
      expect(found, `seed ${seed}`).toBeLessThan(delay * (1 + 1e-6));
      if (Math.abs(found / delay - 1) < 1e-6) exactly++;
    }
    expect(judged).toBeGreaterThan(8);
    expect(exactly / judged).toBeGreaterThan(0.6);
  });

  it('is stable with every delay of whole changes that is less', () => {
    fc.assert(
      fc.property(fc.integer({ min: 0, max: 1e6 }), fc.integer({ min: 2, max: 5 }), (seed, changes) => {
        const loop = alternating(1 + (seed % 4), changes, repeatable(seed));
        const { stable, delayMargin } = liftedMargins(loop);
        fc.pre(stable);
        const whole = Math.min(20, Math.ceil((delayMargin / loop.period!) * changes) - 1);
        for (let delay = 1; delay <= whole; delay++) expect(largestPole(loop, delay)).toBeLessThan(1);
      }),
      { numRuns: 15 },
    );
  });
});

describe('a delay of whole changes', () => {
  it('moves the poles as a chain of delays in the loop does', () => {
    const loop = loopOf([0.3, 0.1], [1, -1.1, 0.2], 1);
    for (const delay of [1, 2, 3, 5, 7]) {
      const chain = Array.from({ length: delay }, () => loopOf([1], [1, 0], 1)).reduce(inSeries, loop);
      const { stable } = marginsOfLoop(chain);
      for (const samples of [2, 3, 4]) {
        expect(largestPole(lifted(loop, samples), delay) < 1, `${delay} over ${samples}`).toBe(stable);
      }
    }
  });
});
