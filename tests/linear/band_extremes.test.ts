import fc from 'fast-check';
import { describe, expect, it } from 'vitest';
import { extremeOverBand } from '../../src/linear/band_extremes.js';
import {
  BALANCED,
  COMPLEMENTARY,
  LOOP_GAIN,
  type LoopResponse,
  SENSITIVITY,
} from '../../src/linear/loop_response.js';
import { marginsOfLoop } from '../../src/linear/margins.js';
import { responseAt } from '../../src/linear/response.js';
import type { StateEquations } from '../../src/linear/state_equations.js';
import { loopOf, randomLoop, repeatable, systemOf } from './loops.js';

const responses: Record<string, LoopResponse> = { LOOP_GAIN, SENSITIVITY, COMPLEMENTARY, BALANCED };

/** From the response of L alone. */
function sizeOf(
  loop: StateEquations,
  { loopWeight, unitWeight, open }: LoopResponse,
  frequency: number,
): number {
  const { real, imaginary } = responseAt(loop, frequency);
  const top = Math.hypot(loopWeight * real + unitWeight, loopWeight * imaginary);
  return open ? top : top / Math.hypot(1 + real, imaginary);
}

const largest = (loop: StateEquations, response: LoopResponse, low: number, high: number) =>
  extremeOverBand(loop, response, 'largest', { low, high });
const smallest = (loop: StateEquations, response: LoopResponse, low: number, high: number) =>
  extremeOverBand(loop, response, 'smallest', { low, high });

describe('extremes of a response over a band', () => {
  it('are at the resonance of a second-order section, or at the ends beside it', () => {
    // |L| of ω²/(s² + 2ζωs + ω²) peaks at ω√(1 − 2ζ²) with 1/(2ζ√(1 − ζ²)).
    const z = 0.1;
    const section = loopOf([1], [1, 2 * z, 1]);
    const peak = largest(section, LOOP_GAIN, 0.5, 2);
    expect(peak.value).toBeCloseTo(1 / (2 * z * Math.sqrt(1 - z * z)), 10);
    expect(peak.frequency).toBeCloseTo(Math.sqrt(1 - 2 * z * z), 8);
    expect(smallest(section, LOOP_GAIN, 0.5, 2).frequency).toBe(2);
    expect(largest(section, LOOP_GAIN, 1.2, 2).frequency).toBe(1.2);
  });

  it('are zero at a notch inside, however narrow', () => {
    const notch = loopOf([1, 0, 1], [1, 0.001, 1]);
    const { value, frequency } = smallest(notch, LOOP_GAIN, 0.3, 3);
    expect(value).toBeLessThan(1e-9);
    expect(frequency).toBeCloseTo(1, 6);
  });

  it('over all frequencies are the peaks of the closed loop', () => {
    const random = repeatable(11);
    let stable = 0;
    for (let k = 0; k < 60; k++) {
      const loop = randomLoop(1 + (k % 6), random);
      const margins = marginsOfLoop(loop);
      if (!margins.stable) continue;
      stable++;
      const top = Math.PI / loop.period!;
      const s = largest(loop, SENSITIVITY, 0, top).value;
      const t = largest(loop, COMPLEMENTARY, 0, top).value;
      expect(Math.abs(s / margins.sensitivityPeak.value - 1)).toBeLessThan(1e-9);
      expect(Math.abs(t / margins.complementaryPeak.value - 1)).toBeLessThan(1e-9);
    }
    expect(stable).toBeGreaterThan(15);
  });

  it('bound the response at every frequency of the band', () => {
    const share = fc.double({ min: 0.001, max: 0.999, noNaN: true });
    const name = fc.constantFrom(...Object.keys(responses));
    fc.assert(
      fc.property(
        fc.integer({ min: 0, max: 1e6 }),
        share,
        share,
        share,
        name,
        (seed, a, b, inside, which) => {
          const loop = randomLoop(1 + (seed % 5), repeatable(seed));
          const top = Math.PI / loop.period!;
          const [low, high] = [Math.min(a, b) * top, Math.max(a, b) * top];
          const size = sizeOf(loop, responses[which], low + inside * (high - low));
          const slack = 1 + 1e-9;
          expect(size).toBeLessThanOrEqual(largest(loop, responses[which], low, high).value * slack);
          expect(size).toBeGreaterThanOrEqual(smallest(loop, responses[which], low, high).value / slack);
        },
      ),
      { numRuns: 100 },
    );
  });

  it('of a part of the band lie within those of the whole', () => {
    const share = fc.double({ min: 0, max: 1, noNaN: true });
    fc.assert(
      fc.property(fc.integer({ min: 0, max: 1e6 }), share, share, (seed, a, b) => {
        const loop = randomLoop(1 + (seed % 8), repeatable(seed));
        const top = Math.PI / loop.period!;
        const [low, high] = [Math.min(a, b) * top, Math.max(a, b) * top];
        for (const response of Object.values(responses)) {
          const part = largest(loop, response, low, high).value;
          expect(part).toBeLessThanOrEqual(largest(loop, response, low, top).value * (1 + 1e-9));
        }
      }),
      { numRuns: 40 },
    );
  });

  it('are without bound at an integrator, and finite beside it', () => {
    const integrator = loopOf([0.1], [1, -1], 1);
    expect(largest(integrator, LOOP_GAIN, 0, 1).value).toBeGreaterThan(1e13);
    // |0.1/(z − 1)| = 0.1/(2·sin(ω/2))
    expect(largest(integrator, LOOP_GAIN, 0.01, 1).value).toBeCloseTo(0.05 / Math.sin(0.005), 9);
    expect(smallest(integrator, SENSITIVITY, 0, 1).value).toBeLessThan(1e-13);
  });

  it('need one input and one output', () => {
    const two = systemOf([[0.5]], [[1, 1]], [[1]], [[0, 0]], 1);
    expect(() => largest(two, LOOP_GAIN, 0, 1)).toThrow('one input and one output');
  });
});

/**
 * A pair of poles so lightly damped that the peak is a millionth of its frequency wide, in a broad band with a broad peak
 * beside it. The checks are closed forms of sections that are far from each other.
 */
describe('very sharp resonances in a band', () => {
  const damping = 1e-6;

  it('are found in the loop gain of a continuous loop, whatever the ends of the band', () => {
    for (const at of [3.7, 41, 333.3, 7001]) {
      const sharp = loopOf([2 * damping * at * at], [1, 2 * damping * at, at * at]);
      const broad = loopOf([0.25, 0.5], [1, 1.4, 1]);
      const both = besideEachOther(sharp, broad);
      const { value, frequency } = largest(both, LOOP_GAIN, 0.02, 9500);
      const tail = responseAt(broad, at);
      // Over its peak the sharp section runs along a circle of diameter 1 about −j/2.
      expect(value / (Math.hypot(tail.real, tail.imaginary - 0.5) + 0.5)).toBeCloseTo(1, 5);
      expect(frequency! / at).toBeCloseTo(1, 5);
    }
  });

  it('are found in the sensitivity of a sampled loop', () => {
    // S of L = (z² − 2·cosθ·z + 1 − z² + 2r·cosθ·z − r²)/(z² − 2r·cosθ·z + r²): poles of the closed loop at r'·e^{±jθ}.
    for (const angle of [0.013, 0.7, 2.2, 3.1]) {
      const [inner, outer] = [0.9, 1 - 1e-6];
      const open = [1, -2 * inner * Math.cos(angle), inner * inner];
      const closed = [1, -2 * outer * Math.cos(angle), outer * outer];
      const loop = loopOf(
        closed.map((x, i) => x - open[i]),
        open,
        0.5,
      );
      const { value, frequency } = largest(loop, SENSITIVITY, 0.001, Math.PI / 0.5);
      expect(value / sizeOf(loop, SENSITIVITY, angle / 0.5)).toBeCloseTo(1, 4);
      expect((frequency! * 0.5) / angle).toBeCloseTo(1, 5);
    }
  });

  it('are found as sharp dips of a loop gain that must stay large', () => {
    for (const at of [0.31, 5, 77]) {
      const dip = loopOf([1, 2 * damping * at, at * at], [1, 2 * at, at * at]);
      const { value, frequency } = smallest(dip, LOOP_GAIN, 0.01, 500);
      expect(value / damping).toBeCloseTo(1, 5);
      expect(frequency! / at).toBeCloseTo(1, 9);
    }
  });

  it('are told apart where one of many is higher by a millionth', () => {
    const heights = [1, 1.000001, 0.999999, 1.0000005];
    const places = [10, 20.3, 41.7, 80.9];
    const comb = places
      .map((at, i) => loopOf([2 * damping * at * heights[i], 0], [1, 2 * damping * at, at * at]))
      .reduce(besideEachOther);
    const { value, frequency } = largest(comb, LOOP_GAIN, 1, 1000);
    expect(frequency! / 20.3).toBeCloseTo(1, 8);
    expect(value).toBeCloseTo(1.000001, 9);
  });

  it('do not count beyond the end of the band', () => {
    const sharp = loopOf([2 * damping], [1, 2 * damping, 1]);
    const { value, frequency } = largest(sharp, LOOP_GAIN, 0.5, 0.9999);
    expect(frequency).toBe(0.9999);
    expect(value).toBeCloseTo((2 * damping) / Math.hypot(1 - 0.9999 ** 2, 2 * damping * 0.9999), 12);
  });
});

/** The sum of two responses. */
function besideEachOther(one: StateEquations, other: StateEquations): StateEquations {
  const rows = (matrix: { rows: number; columns: number; data: Float64Array }): number[][] =>
    Array.from({ length: matrix.rows }, (_, i) => [
      ...matrix.data.subarray(i * matrix.columns, (i + 1) * matrix.columns),
    ]);
  const [n, m] = [one.a.rows, other.a.rows];
  return systemOf(
    [
      ...rows(one.a).map((row) => [...row, ...new Array(m).fill(0)]),
      ...rows(other.a).map((row) => [...new Array(n).fill(0), ...row]),
    ],
    [...rows(one.b), ...rows(other.b)],
    [[...one.c.data, ...other.c.data]],
    [[one.d.data[0] + other.d.data[0]]],
    one.period,
  );
}
