import fc from 'fast-check';
import { describe, expect, it } from 'vitest';
import { discMarginOfLoop } from '../../src/linear/disc_margin.js';
import { type LoopMargins, marginsOfLoop } from '../../src/linear/margins.js';
import { add, fromRows, identity, multiply, scale, zeros } from '../../src/linear/matrix.js';
import { responseAt } from '../../src/linear/response.js';
import { solve } from '../../src/linear/solve.js';
import type { StateEquations } from '../../src/linear/state_equations.js';
import { inSeries, loopOf, product, randomLoop, repeatable, systemOf, times } from './loops.js';

const INFINITE = Number.POSITIVE_INFINITY;

describe('margins at the ends of the frequency range', () => {
  it('counts half the sampling frequency, where L is real, for gain and modulus margin', () => {
    // Closed form: L = k/(z − 1) is −k/2 at z = −1.
    const period = 0.01;
    const { gainMargin, modulusMargin, sensitivityPeak, phaseCrossings } = marginsOfLoop(
      loopOf([0.4], [1, -1], period),
    );
    expect(gainMargin.up).toBeCloseTo(5, 13);
    expect(modulusMargin).toBeCloseTo(0.8, 13);
    expect(sensitivityPeak.frequency! * period).toBeCloseTo(Math.PI, 13);
    expect(phaseCrossings).toHaveLength(1);
  });

  it('counts zero frequency: a static gain of −1/2 may double', () => {
    const { gainMargin, sensitivityPeak } = marginsOfLoop(loopOf([-0.1], [1, -0.8], 0.1));
    expect(gainMargin).toEqual({ up: expect.closeTo(2, 13), down: 0, ratio: expect.closeTo(2, 13) });
    expect(sensitivityPeak).toEqual({ value: expect.closeTo(2, 13), frequency: 0 });
  });

  it('counts infinite frequency in continuous loops, with the feedthrough', () => {
    // Closed form: L = −0.5·(s + 0.1)/(s + 1) is −0.5 at infinity and −0.05 at zero.
    const { gainMargin, sensitivityPeak } = marginsOfLoop(loopOf([-0.5, -0.05], [1, 1]));
    expect(gainMargin.up).toBeCloseTo(2, 13);
    expect(sensitivityPeak).toEqual({ value: expect.closeTo(2, 13), frequency: INFINITE });
  });

  it('sees an integrator as unlimited loop gain at zero frequency, without a crossing there', () => {
    const margins = marginsOfLoop(loopOf([0.1, -0.08], product([1, -1], [1, -1], [1, -0.2]), 1e-3));
    expect(margins.stable).toBe(true);
    expect(margins.gainCrossings).toHaveLength(1);
    expect(margins.phaseCrossings.every(({ frequency }) => frequency > 0)).toBe(true);
    expect(margins.complementaryPeak.value).toBeGreaterThan(1);
  });

  it('has no states to speak of in a pure gain', () => {
    const positive = marginsOfLoop(loopOf([0.5], [1], 0.1));
    expect(positive).toMatchObject({ stable: true, phaseMargin: INFINITE, delayMargin: INFINITE });
    expect(positive.gainMargin).toEqual({ up: INFINITE, down: 0, ratio: INFINITE });
    expect(positive.modulusMargin).toBeCloseTo(1.5, 15);
    expect(marginsOfLoop(loopOf([-0.5], [1], 0.1)).gainMargin.up).toBeCloseTo(2, 15);
  });
});

describe('margins without a crossing', () => {
  it('are infinite, and one over the gain at the ends for the modulus', () => {
    const margins = marginsOfLoop(loopOf([0.05], [1, -0.9], 0.1));
    expect(margins.gainCrossings).toEqual([]);
    expect([margins.phaseMargin, margins.delayMargin]).toEqual([INFINITE, INFINITE]);
    // −L at z = −1 is 0.05/1.9.
    expect(margins.gainMargin.ratio).toBeCloseTo(1.9 / 0.05, 11);
  });

  it('of a loop that is cut are all infinite', () => {
    const margins = marginsOfLoop(loopOf([0], [1, -0.9], 0.1));
    expect(margins.stable).toBe(true);
    expect(margins.gainMargin.ratio).toBe(INFINITE);
    expect(margins.phaseMargin).toBe(INFINITE);
    expect(margins.modulusMargin).toBe(1);
    expect(margins.complementaryPeak.value).toBe(0);
  });
});

describe('unstable loops', () => {
  it('have no margin at all, whatever their crossings would say', () => {
    for (const loop of [
      loopOf([9], [1, 3, 3, 1]),
      loopOf([3], [1, -1], 0.1),
      loopOf([0.05], [1, -1.2], 0.1),
    ]) {
      const margins = marginsOfLoop(loop);
      expect(margins).toMatchObject({
        stable: false,
        gainMargin: { up: 1, down: 1, ratio: 1 },
        phaseMargin: 0,
        delayMargin: 0,
        modulusMargin: 0,
      });
      expect(margins.sensitivityPeak).toEqual({ value: INFINITE, frequency: undefined });
      expect(margins.complementaryPeak.value).toBe(INFINITE);
    }
  });

  it('still show where they cross', () => {
    expect(marginsOfLoop(loopOf([9], [1, 3, 3, 1])).phaseCrossings[0].frequency).toBeCloseTo(
      Math.sqrt(3),
      13,
    );
  });

  it('include one with a hidden integrator that the loop does not close', () => {
    const hidden = systemOf(
      [
        [0.5, 0],
        [0.3, 1],
      ],
      [[1], [0]],
      [[0.1, 0]],
      [[0]],
      0.1,
    );
    expect(marginsOfLoop(hidden).stable).toBe(false);
    const turned = inBasis(
      hidden,
      fromRows([
        [1, 0.3],
        [-0.7, 1.1],
      ]),
    );
    expect(marginsOfLoop(turned).stable).toBe(false);
  });

  it('can be stable only with enough gain: the margin downwards then counts', () => {
    // Closed form: z − 1.2 + k is stable for 0.2 < k < 2.2.
    const { gainMargin, stable } = marginsOfLoop(loopOf([0.25], [1, -1.2], 0.1));
    expect(stable).toBe(true);
    expect(gainMargin.down).toBeCloseTo(0.8, 13);
    expect(gainMargin.up).toBeCloseTo(2.2 / 0.25, 12);
    expect(gainMargin.ratio).toBeCloseTo(1.25, 13);
  });
});

describe('crossings that a coarse grid would miss', () => {
  it('a resonance of damping 1e-6 which just reaches −1 in size', () => {
    // A second-order part of relative size 1/(2ζ) at resonance on an integrator: two crossings within 1e-6 of each other.
    const damping = 1e-6;
    const resonance = loopOf([1e-5], [1, 2 * damping * 30, 900]);
    const both = inParallel(loopOf([0.5], [1, 0]), resonance);
    const { gainCrossings } = marginsOfLoop(both);
    expect(gainCrossings).toHaveLength(1);
    const higher = marginsOfLoop(inParallel(loopOf([0.5], [1, 0]), times(resonance, 200)));
    expect(higher.gainCrossings).toHaveLength(3);
    for (const { frequency } of higher.gainCrossings.slice(1))
      expect(Math.abs(frequency - 30)).toBeLessThan(1e-3);
  });

  it('a pole exactly on the boundary of stability, passed with a jump of the phase', () => {
    // An undamped resonance in the open loop, damped by the loop itself: s/(s² + 1) has |L| = 1 at (√5 ± 1)/2.
    const { gainCrossings, stable } = marginsOfLoop(loopOf([1, 0], [1, 0, 1]));
    expect(stable).toBe(true);
    expect(gainCrossings).toHaveLength(2);
    expect(gainCrossings[0].frequency).toBeCloseTo((Math.sqrt(5) - 1) / 2, 13);
    expect(gainCrossings[1].frequency).toBeCloseTo((Math.sqrt(5) + 1) / 2, 13);
    expect(gainCrossings[0].phaseMargin).toBeCloseTo(-Math.PI / 2, 12);
    expect(gainCrossings[1].phaseMargin).toBeCloseTo(Math.PI / 2, 12);
  });

  it('two equal sensitivity peaks: either is right, and the value is exact', () => {
    // L = k·(1/(1 + 0.02s) type) parts mirrored about 1 rad/s give S the same size at w and 1/w.
    const loop = loopOf([0.02, 0, 0], product([1, 0.01, 0.25], [1, 0.04, 4]));
    const { sensitivityPeak } = marginsOfLoop(loop);
    const sizeOfS = (w: number) => {
      const { real, imaginary } = responseAt(loop, w);
      return 1 / Math.hypot(1 + real, imaginary);
    };
    const w = sensitivityPeak.frequency!;
    expect(sizeOfS(1 / w) / sizeOfS(w)).toBeCloseTo(1, 9);
    expect(sensitivityPeak.value / sizeOfS(w)).toBeCloseTo(1, 12);
  });
});

describe('what cannot be judged', () => {
  it('is refused with a reason', () => {
    expect(() => marginsOfLoop(loopOf([-1, 0], [1, 1]))).toThrow(/feedthrough is -1/);
    expect(() => marginsOfLoop(systemOf([[1]], [[1, 1]], [[1]], [[0, 0]]))).toThrow(/has 2 and 1/);
    expect(() => marginsOfLoop(systemOf([[Number.NaN]], [[1]], [[1]], [[0]], 1))).toThrow(/\(0, 0\).*NaN/);
  });
});

describe('laws of margins', () => {
  const loops = fc
    .record({ order: fc.integer({ min: 1, max: 8 }), seed: fc.integer({ min: 0, max: 2 ** 31 }) })
    .map(({ order, seed }) => randomLoop(order, repeatable(seed)));
  // Loops with a sensitivity peak in the thousands are a breath from instability: a change of rounding moves their margins.
  const stableLoops = loops.filter((loop) => {
    const { stable, sensitivityPeak } = marginsOfLoop(loop);
    return stable && sensitivityPeak.value < 1e3;
  });
  const runs = { numRuns: 40 };

  it('a factor k on the loop divides the gain margin by k', () => {
    fc.assert(
      fc.property(stableLoops, fc.double({ min: 0.1, max: 0.9, noNaN: true }), (loop, share) => {
        const { gainMargin } = marginsOfLoop(loop);
        fc.pre(Number.isFinite(gainMargin.up));
        const factor = gainMargin.up ** share;
        const changed = marginsOfLoop(times(loop, factor));
        expect(changed.stable).toBe(true);
        expectClose(changed.gainMargin.up * factor, gainMargin.up, 1e-8);
        expectClose(changed.gainMargin.down * factor, gainMargin.down, 1e-8);
      }),
      runs,
    );
  });

  it('just below the gain margin the loop is stable, just above it is not', () => {
    fc.assert(
      fc.property(stableLoops, (loop) => {
        const { gainMargin } = marginsOfLoop(loop);
        fc.pre(Number.isFinite(gainMargin.up) && gainMargin.up < 1e3);
        expect(marginsOfLoop(times(loop, gainMargin.up * (1 - 1e-5))).stable).toBe(true);
        expect(marginsOfLoop(times(loop, gainMargin.up * (1 + 1e-5))).stable).toBe(false);
      }),
      runs,
    );
  });

  it('with one gain crossing, one more sample of delay is survived exactly when the delay margin exceeds a period', () => {
    fc.assert(
      fc.property(stableLoops, (loop) => {
        const { gainCrossings, delayMargin } = marginsOfLoop(loop);
        // |L| < 1 at half the sampling frequency: then the phase lag that grows up to there meets −1 at the crossing only.
        fc.pre(gainCrossings.length === 1 && responseSize(loop, Math.PI / loop.period!) < 1);
        const spare = delayMargin / loop.period!;
        fc.pre(Math.abs(spare - 1) > 1e-6);
        const delayed = inSeries(loop, loopOf([1], [1, 0], loop.period));
        expect(marginsOfLoop(delayed).stable).toBe(spare > 1);
      }),
      runs,
    );
  });

  it('do not depend on the choice of states', () => {
    fc.assert(
      fc.property(stableLoops, fc.integer({ min: 0, max: 1e6 }), (loop, seed) => {
        // A dense basis mixes states of very different size: with many states the change of basis itself loses the digits.
        fc.pre(loop.a.rows <= 4);
        const random = repeatable(seed);
        const n = loop.a.rows;
        const noise = {
          rows: n,
          columns: n,
          data: Float64Array.from({ length: n * n }, () => random() - 0.5),
        };
        const turned = inBasis(loop, add(scale(identity(n), n), noise));
        expectSameMargins(marginsOfLoop(turned), marginsOfLoop(loop), 1e-5);
      }),
      runs,
    );
  });

  it('do not depend on the units of states, nor the time margins on the unit of time but for its factor', () => {
    fc.assert(
      fc.property(stableLoops, fc.double({ min: 1e-3, max: 1e3, noNaN: true }), (loop, factor) => {
        const n = loop.a.rows;
        const units = zeros(n, n);
        for (let i = 0; i < n; i++) units.data[i * n + i] = 10 ** ((i % 5) * 3 - 6);
        const original = marginsOfLoop(loop);
        expectSameMargins(marginsOfLoop(inBasis(loop, units)), original, 1e-6);
        const slower = marginsOfLoop({ ...loop, period: loop.period! * factor });
        expectClose(slower.delayMargin / factor, original.delayMargin, 1e-6);
        expectClose(slower.phaseMargin, original.phaseMargin, 1e-6);
        expectClose(slower.modulusMargin, original.modulusMargin, 1e-6);
        slower.gainCrossings.forEach(({ frequency }, i) => {
          expectClose(frequency * factor, original.gainCrossings[i].frequency, 1e-6);
        });
      }),
      runs,
    );
  });

  it('a modulus margin bounds the others (Skogestad and Postlethwaite, 2005)', () => {
    fc.assert(
      fc.property(stableLoops, (loop) => {
        const { modulusMargin, gainMargin, phaseMargin, sensitivityPeak, complementaryPeak } =
          marginsOfLoop(loop);
        expect(modulusMargin * sensitivityPeak.value).toBeCloseTo(1, 12);
        if (modulusMargin < 1)
          expect(gainMargin.up).toBeGreaterThanOrEqual((1 / (1 - modulusMargin)) * (1 - 1e-9));
        expect(gainMargin.down).toBeLessThanOrEqual((1 / (1 + modulusMargin)) * (1 + 1e-9));
        expect(phaseMargin).toBeGreaterThanOrEqual(
          2 * Math.asin(Math.min(1, modulusMargin / 2)) * (1 - 1e-9),
        );
        expect(Math.abs(complementaryPeak.value - sensitivityPeak.value)).toBeLessThanOrEqual(1 + 1e-9);
      }),
      runs,
    );
  });

  it('a disc margin bounds gain and phase together (Seiler, Packard and Gahinet, 2020)', () => {
    fc.assert(
      fc.property(stableLoops, (loop) => {
        const disc = discMarginOfLoop(loop);
        const { gainMargin, phaseMargin } = marginsOfLoop(loop);
        expect(gainMargin.up).toBeGreaterThanOrEqual(disc.gainRange.up * (1 - 1e-9));
        expect(gainMargin.down).toBeLessThanOrEqual(disc.gainRange.down * (1 + 1e-9) + 1e-12);
        expect(phaseMargin).toBeGreaterThanOrEqual(disc.phaseMargin * (1 - 1e-9));
      }),
      runs,
    );
  });
});

function expectSameMargins(actual: LoopMargins, expected: LoopMargins, tolerance: number): void {
  expect(actual.stable).toBe(expected.stable);
  for (const name of ['phaseMargin', 'delayMargin', 'modulusMargin'] as const) {
    expectClose(actual[name], expected[name], tolerance);
  }
  expectClose(actual.gainMargin.up, expected.gainMargin.up, tolerance);
  expectClose(actual.gainMargin.down, expected.gainMargin.down, tolerance);
  expectClose(actual.complementaryPeak.value, expected.complementaryPeak.value, tolerance);
}

function expectClose(actual: number, expected: number, tolerance: number): void {
  if (actual === expected) return;
  expect(Math.abs(actual - expected), `${actual} against ${expected}`).toBeLessThanOrEqual(
    tolerance * Math.abs(expected) + 1e-12,
  );
}

/** The same system with the states x = basis·x̃. */
function inBasis(system: StateEquations, basis: StateEquations['a']): StateEquations {
  return {
    ...system,
    a: solve(basis, multiply(system.a, basis)),
    b: solve(basis, system.b),
    c: multiply(system.c, basis),
  };
}

/** The sum of two continuous responses, by adding the outputs. */
function inParallel(first: StateEquations, second: StateEquations): StateEquations {
  const n = first.a.rows;
  const m = second.a.rows;
  const rows = Array.from({ length: n + m }, (_, i) =>
    Array.from({ length: n + m }, (_, j) => {
      if (i < n && j < n) return first.a.data[i * n + j];
      return i >= n && j >= n ? second.a.data[(i - n) * m + j - n] : 0;
    }),
  );
  return systemOf(
    rows,
    [...first.b.data, ...second.b.data].map((entry) => [entry]),
    [[...first.c.data, ...second.c.data]],
    [[first.d.data[0] + second.d.data[0]]],
  );
}

function responseSize(system: StateEquations, frequency: number): number {
  const { real, imaginary } = responseAt(system, frequency);
  return Math.hypot(real, imaginary);
}
