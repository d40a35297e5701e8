import { describe, expect, it } from 'vitest';
import { closedLoopMatrix } from '../../src/linear/closed_loop.js';
import { marginsOfLoop } from '../../src/linear/margins.js';
import { areStable, polesOf } from '../../src/linear/poles.js';
import type { StateEquations } from '../../src/linear/state_equations.js';
import { expectPublished, publishedCase } from '../published.js';
import { holdEquivalent } from './hold_equivalent.js';
import { inSeries, loopOf, product, systemOf, times } from './loops.js';

/** Upward gain margin of a loop taken at a gain small enough to be stable, as a gain. */
function ultimateGain(loop: StateEquations, gain: number, deadTime = 0): number {
  return gain * marginsOfLoop(times(loop, gain), deadTime).gainMargin.up;
}

// Each published case names its own source: reference/published/README.md.
describe('stability limits', () => {
  for (const id of ['C01', 'C02', 'C03', 'C04']) {
    it(`${id}: ${publishedCase(id).title}`, () => {
      const { numerator, denominator, delay_s: delay } = publishedCase(id).given;
      const loop = times(loopOf(numerator, denominator), 0.3);
      const { gainMargin, phaseCrossings } = marginsOfLoop(loop, delay);
      const { frequency } = phaseCrossings[0];
      expectPublished(id, 'ultimate_gain', 0.3 * gainMargin.up);
      expectPublished(id, 'ultimate_frequency', frequency);
      expectPublished(id, 'ultimate_period', (2 * Math.PI) / frequency);
      if (id === 'C04') expectPublished(id, 'gain_times_delay', 0.3 * gainMargin.up * delay);
    });
  }

  it(`C05: ${publishedCase('C05').title}`, () => {
    const { sampling_period_s: period, delays_samples: delays } = publishedCase('C05').given;
    const margins = delays.map((delay: number) =>
      marginsOfLoop(loopOf([0.1], [1, -1, ...new Array(delay).fill(0)], period)),
    );
    const limits = margins.map(({ gainMargin }: { gainMargin: { up: number } }) => 0.1 * gainMargin.up);
    expectPublished('C05', 'gain_times_period_limit', limits);
    expectPublished(
      'C05',
      'ultimate_gain',
      limits.map((limit: number) => limit / period),
    );
    expectPublished(
      'C05',
      'oscillation_angle',
      margins.map((one: ReturnType<typeof marginsOfLoop>) => one.phaseCrossings[0].frequency * period),
    );
  });

  it(`C06: ${publishedCase('C06').title}`, () => {
    const {
      state_matrix: a,
      input_matrix: b,
      output_matrix: c,
      sampling_period_s: period,
    } = publishedCase('C06').given;
    expectPublished('C06', 'gain_limit', ultimateGain(holdEquivalent(systemOf(a, b, c, [[0]]), period), 0.5));
  });

  it(`C07: ultimate gain and period of ${publishedCase('C07').title}, and the settings from them`, () => {
    const { plant_numerator: numerator, plant_denominator: denominator } = publishedCase('C07').given;
    const gain = ultimateGain(loopOf(numerator, denominator), 1);
    const { frequency } = marginsOfLoop(loopOf(numerator, denominator)).phaseCrossings[0];
    const period = (2 * Math.PI) / frequency;
    expectPublished('C07', 'ultimate_gain', gain);
    expectPublished('C07', 'ultimate_period', period);
    expectPublished('C07', 'rule_gain', 0.6 * gain);
    expectPublished('C07', 'rule_integral_time', period / 2);
    expectPublished('C07', 'rule_derivative_time', period / 8);
  });

  it(`D07: ${publishedCase('D07').title}`, () => {
    const { given, expect: expected } = publishedCase('D07');
    const [f1, f2] = expected.regulator_gain.value as number[];
    const [d1, d2] = expected.observer_gain.value as number[];
    const plant = systemOf(given.state_matrix, given.input_matrix, given.output_matrix, [[0]]);
    // The regulator f·(sI − A + B·f + d·C)⁻¹·d, with A = [1 1; 0 1], B = [0; 1], C = [1 0].
    const regulator = systemOf(
      [
        [1 - d1, 1],
        [-d2 - f1, 1 - f2],
      ],
      [[d1], [d2]],
      [[f1, f2]],
      [[0]],
    );
    const { stable, gainMargin } = marginsOfLoop(inSeries(plant, regulator));
    expect(stable).toBe(true);
    expectPublished('D07', 'upper_gain_limit', gainMargin.up);
    expectPublished('D07', 'lower_gain_limit', gainMargin.down);
  });

  it(`G08: ${publishedCase('G08').title}`, () => {
    const { gain_per_s: gains, delay_s: delays } = publishedCase('G08').given;
    const corners = gains.flatMap((gain: number) =>
      delays.map((delay: number) => marginsOfLoop(loopOf([gain], [1, 0]), delay)),
    ) as ReturnType<typeof marginsOfLoop>[];
    const degrees = 180 / Math.PI;
    expectPublished(
      'G08',
      'least_phase_margin',
      Math.min(...corners.map((one) => one.phaseMargin)) * degrees,
    );
    expectPublished('G08', 'least_gain_margin', Math.min(...corners.map((one) => one.gainMargin.ratio)));
    expectPublished('G08', 'least_delay_margin', Math.min(...corners.map((one) => one.delayMargin)));
    const nominal = marginsOfLoop(loopOf([2], [1, 0]), 0.2);
    expectPublished('G08', 'nominal_phase_margin', nominal.phaseMargin * degrees);
  });

  it('agree with the closed-loop poles on either side of the limit', () => {
    // 8/(s + 1)³ is at the limit: C01.
    for (const [factor, stable] of [
      [0.999999, true],
      [1.000001, false],
    ] as const) {
      const loop = times(loopOf([8], [1, 3, 3, 1]), factor);
      expect(areStable(polesOf(closedLoopMatrix(loop), undefined), undefined)).toBe(stable);
      expect(marginsOfLoop(loop).stable).toBe(stable);
    }
  });
});

describe('stability with a dead time', () => {
  // Closed form: the loop k·e^{−sL}/s is stable exactly for 0 < k·L < π/2.
  it('ends for an integrator where gain times delay is π/2', () => {
    for (const [product, stable] of [
      [1.5707, true],
      [1.5709, false],
      [9, false],
    ] as const) {
      expect(marginsOfLoop(loopOf([product / 0.4], [1, 0]), 0.4).stable).toBe(stable);
    }
  });

  it('can come back as the dead time grows, for a lightly damped plant', () => {
    // For k/(s² + 2ζs + 1) with k < 1 and small ζ the intervals alternate (Walton and Marshall, 1987). The two gain crossings
    // are the roots of (1 − ω²)² + 4ζ²ω² = k²; the ends of the intervals follow from the phase there.
    const damping = 0.02;
    const gain = 0.3;
    const middle = 1 - 2 * damping * damping;
    const spread = Math.sqrt(middle * middle - 1 + gain * gain);
    const [low, high] = [Math.sqrt(middle - spread), Math.sqrt(middle + spread)];
    const phaseAt = (w: number) => Math.PI - Math.atan2(2 * damping * w, 1 - w * w);
    const firstLost = phaseAt(high) / high;
    const firstBack = phaseAt(low) / low;
    expect(firstLost).toBeLessThan(firstBack);
    const stableWith = (delay: number) => marginsOfLoop(loopOf([gain], [1, 2 * damping, 1]), delay).stable;
    expect(stableWith(firstLost * 0.999)).toBe(true);
    expect(stableWith(firstLost * 1.001)).toBe(false);
    expect(stableWith(firstBack * 0.999)).toBe(false);
    expect(stableWith(firstBack * 1.001)).toBe(true);
    expect(stableWith((phaseAt(high) + 2 * Math.PI) / high + 0.001)).toBe(false);
  });

  it('is lost at once when the gain at infinite frequency is one or more', () => {
    expect(marginsOfLoop(loopOf([1.2, 1], [1, 1.5]), 1e-6).stable).toBe(false);
  });

  it('is refused for sampled loops and negative dead times', () => {
    expect(() => marginsOfLoop(loopOf([1], [1, -0.5], 0.1), 0.1)).toThrow(/dead time of 0.1 s/);
    expect(() => marginsOfLoop(loopOf([1], [1, 1]), -1)).toThrow(/dead time of -1 s/);
  });

  it('asks for a shorter dead time when the frequency grid would not end', () => {
    expect(() => marginsOfLoop(loopOf([0.5], product([1, 1e6], [1, 1])), 100)).toThrow(
      /dead time is too long/,
    );
  });
});
