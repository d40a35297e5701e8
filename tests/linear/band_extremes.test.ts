import fc from 'fast-check';
import { describe, expect, it } from 'vitest';
import { extremesOverBand, LOOP_GAIN } from '../../src/linear/band_extremes.js';
import { COMPLEMENTARY, SENSITIVITY } from '../../src/linear/loop_peaks.js';
import { marginsOfLoop } from '../../src/linear/margins.js';
import { responseAt } from '../../src/linear/response.js';
import type { StateEquations } from '../../src/linear/state_equations.js';
import { loopOf, randomLoop, repeatable, systemOf } from './loops.js';

function sizes(loop: StateEquations, frequency: number): { loop: number; sensitivity: number } {
  const { real, imaginary } = responseAt(loop, frequency);
  return { loop: Math.hypot(real, imaginary), sensitivity: 1 / Math.hypot(1 + real, imaginary) };
}

describe('extremes of a response over a band', () => {
  it('are at the resonance of a second-order section, or at the ends beside it', () => {
    // |L| of ω²/(s² + 2ζωs + ω²) peaks at ω√(1 − 2ζ²) with 1/(2ζ√(1 − ζ²)).
    const z = 0.1;
    const section = loopOf([1], [1, 2 * z, 1]);
    const { largest, smallest } = extremesOverBand(section, LOOP_GAIN, 0.5, 2);
    expect(largest.value).toBeCloseTo(1 / (2 * z * Math.sqrt(1 - z * z)), 10);
    expect(largest.frequency).toBeCloseTo(Math.sqrt(1 - 2 * z * z), 8);
    expect(smallest.frequency).toBe(2);
    const beside = extremesOverBand(section, LOOP_GAIN, 1.2, 2);
    expect(beside.largest.frequency).toBe(1.2);
  });

  it('are zero at a notch inside, however narrow', () => {
    const notch = loopOf([1, 0, 1], [1, 0.001, 1]);
    const { smallest } = extremesOverBand(notch, LOOP_GAIN, 0.3, 3);
    expect(smallest.value).toBeLessThan(1e-9);
    expect(smallest.frequency).toBeCloseTo(1, 6);
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
      const s = extremesOverBand(loop, SENSITIVITY, 0, top).largest.value;
      const t = extremesOverBand(loop, COMPLEMENTARY, 0, top).largest.value;
      expect(Math.abs(s / margins.sensitivityPeak.value - 1)).toBeLessThan(1e-8);
      expect(Math.abs(t / margins.complementaryPeak.value - 1)).toBeLessThan(1e-8);
    }
    expect(stable).toBeGreaterThan(15);
  });

  it('bound the response at every frequency of the band', () => {
    const share = fc.double({ min: 0.001, max: 0.999, noNaN: true });
    fc.assert(
      fc.property(fc.integer({ min: 0, max: 1e6 }), share, share, share, (seed, a, b, inside) => {
        const loop = randomLoop(1 + (seed % 5), repeatable(seed));
        const top = Math.PI / loop.period!;
        const [low, high] = [Math.min(a, b) * top, Math.max(a, b) * top];
        const size = sizes(loop, low + inside * (high - low));
        const gain = extremesOverBand(loop, LOOP_GAIN, low, high);
        const sensitivity = extremesOverBand(loop, SENSITIVITY, low, high);
        const slack = 1 + 1e-9;
        expect(size.loop).toBeLessThanOrEqual(gain.largest.value * slack);
        expect(size.loop).toBeGreaterThanOrEqual(gain.smallest.value / slack - 1e-12);
        expect(size.sensitivity).toBeLessThanOrEqual(sensitivity.largest.value * slack);
      }),
      { numRuns: 60 },
    );
  });

  it('need one input and one output', () => {
    const two = systemOf([[0.5]], [[1, 1]], [[1]], [[0, 0]], 1);
    expect(() => extremesOverBand(two, LOOP_GAIN, 0, 1)).toThrow('one input and one output');
  });
});
