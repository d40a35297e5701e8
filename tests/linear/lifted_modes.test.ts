import fc from 'fast-check';
import { describe, expect, it } from 'vitest';
import { closedLoopMatrix } from '../../src/linear/closed_loop.js';
import { leastLiftedDamping } from '../../src/linear/lifted_modes.js';
import { liftedSensitivity } from '../../src/linear/lifted_response.js';
import { closedLoopDecay, modesOf } from '../../src/linear/modes.js';
import { polesOf } from '../../src/linear/poles.js';
import type { StateEquations } from '../../src/linear/state_equations.js';
import { lifted, loopOf, randomLoop, repeatable, systemOf } from './loops.js';

const dampingOf = (loop: StateEquations): number => leastLiftedDamping(liftedSensitivity(loop));

/** A loop whose closed loop has the poles r·e^{±jφ} a sample. */
function closedAt(radius: number, angle: number): StateEquations {
  const open = [1, -1.2, 0.35];
  const closed = [1, -2 * radius * Math.cos(angle), radius * radius];
  return loopOf(
    closed.map((x, i) => x - open[i]),
    open,
    0.1,
  );
}

describe('damping of a closed loop over a cycle of several samples', () => {
  it('is that of the loop itself where every sample is the same', () => {
    fc.assert(
      fc.property(fc.integer({ min: 0, max: 1e6 }), fc.integer({ min: 2, max: 10 }), (seed, samples) => {
        const loop = randomLoop(1 + (seed % 8), repeatable(seed));
        const own = closedLoopDecay(loop).dampingRatio;
        // Of a motion that is nearly over within the cycle the multiplier has few digits left.
        const fastest = modesOf(closedLoopMatrix(loop), loop.period).at(-1)!.decayRate;
        const lost = Math.exp(fastest * loop.period! * samples);
        fc.pre(lost < 1e6);
        expect(Math.abs(dampingOf(lifted(loop, samples)) / own - 1)).toBeLessThan(1e-8 + 1e-11 * lost);
      }),
      { numRuns: 150 },
    );
  });

  it('is found where the search for a mode hits its multiplier to the last bit', () => {
    const loop = randomLoop(1 + (95742 % 8), repeatable(95742));
    expect(dampingOf(lifted(loop, 7)) / closedLoopDecay(loop).dampingRatio).toBeCloseTo(1, 8);
  });

  it('counts the true frequency of a motion, also where that is folded in the multiplier of the cycle', () => {
    // Closed form: s = ln(r) ± jφ a sample.
    for (const angle of [0.2, 1, 1.7, 2.4, 3.1]) {
      for (const samples of [2, 3, 7]) {
        const radius = 0.9;
        const expected = -Math.log(radius) / Math.hypot(Math.log(radius), angle);
        expect(dampingOf(lifted(closedAt(radius, angle), samples))).toBeCloseTo(expected, 9);
      }
    }
  });

  it('changes little where the samples differ little', () => {
    const loop = lifted(closedAt(0.9, 2.4), 3);
    const expected = dampingOf(loop);
    const gains = [1.01, 0.99, 1];
    const b = { ...loop.b, data: loop.b.data.map((entry, at) => entry * gains[at % 3]) };
    const d = { ...loop.d, data: loop.d.data.map((entry, at) => entry * gains[at % 3]) };
    const found = dampingOf({ ...loop, b, d });
    expect(found).not.toBe(expected);
    expect(Math.abs(found - expected)).toBeLessThan(0.01);
  });

  it('is one for motions that are over within a cycle, and negative where one grows', () => {
    // Closed loop z·z·z: over after three samples; with a fourth sample in the cycle nothing is left at its end.
    const dead = loopOf([0.9, -0.2, 0], [1, -0.9, 0.2, 0], 1);
    expect(dampingOf(lifted(dead, 4))).toBe(1);
    expect(dampingOf(lifted(closedAt(1.02, 0.5), 4))).toBeLessThan(0);
    expect(dampingOf(lifted(loopOf([0.5], [1], 1), 2))).toBe(1);
  });

  it('does not hang on the units of the states', () => {
    const loop = lifted(randomLoop(5, repeatable(77)), 4);
    const n = loop.a.rows;
    const units = Array.from({ length: n }, (_, i) => 10 ** (3 * i - 6));
    const scaled: StateEquations = {
      ...loop,
      a: {
        ...loop.a,
        data: loop.a.data.map((x, at) => (x * units[Math.floor(at / n)]) / units[at % n]),
      },
      b: { ...loop.b, data: loop.b.data.map((x, at) => x * units[Math.floor(at / loop.b.columns)]) },
      c: { ...loop.c, data: loop.c.data.map((x, at) => x / units[at % n]) },
    };
    expect(dampingOf(scaled) / dampingOf(loop)).toBeCloseTo(1, 8);
  });

  it('is refused where two frequencies are as strong in a mode, with the range that it may have', () => {
    // The signal returns at every second sample only: a decay by half a cycle is as much a decaying alternation.
    const loop = systemOf(
      [[1]],
      [[0.5, 0]],
      [[1], [0]],
      [
        [0, 0],
        [0, 0],
      ],
      2,
    );
    expect(polesOf(liftedSensitivity(loop).a, 2)[0].real).toBeCloseTo(-0.5, 14);
    expect(() => dampingOf(loop)).toThrow(/from 0.11 to 1/);
  });
});
