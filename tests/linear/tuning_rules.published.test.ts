import { describe, expect, it } from 'vitest';
import { marginsOfLoop } from '../../src/linear/margins.js';
import { closedLoopDecay } from '../../src/linear/modes.js';
import { expectPublished, publishedCase, publishedGroup } from '../published.js';
import { loopOf, product } from './loops.js';

const DEGREES = 180 / Math.PI;

// Each published case names its own source: reference/published/README.md.
describe('loops tuned by published rules', () => {
  for (const id of ['E01', 'E02']) {
    it(`${id}: ${publishedCase(id).title}`, () => {
      const { given, expect: expected } = publishedCase(id);
      const gain = expected.gain.value as number;
      const integralTime = expected.integral_time.value as number;
      const process =
        id === 'E01'
          ? { k: given.k, denominator: [given.tau_s, 1] }
          : { k: given.k_per_s, denominator: [1, 0] };
      const numerator = [gain * process.k * integralTime, gain * process.k];
      const theta: number = given.theta_s;
      const margins = marginsOfLoop(
        loopOf(numerator, product([integralTime, 0], process.denominator)),
        theta,
      );
      expectPublished(id, 'sensitivity_peak', margins.sensitivityPeak.value);
      expectPublished(id, 'complementary_sensitivity_peak', margins.complementaryPeak.value);
      expectPublished(id, 'gain_margin', margins.gainMargin.up);
      expectPublished(id, 'phase_margin', margins.phaseMargin * DEGREES);
      expectPublished(id, 'crossover_times_theta', margins.gainCrossings[0].frequency * theta);
      expectPublished(id, 'phase_crossover_times_theta', margins.phaseCrossings[0].frequency * theta);
      expectPublished(id, 'delay_margin_over_theta', margins.delayMargin / theta);
    });
  }

  for (const { id, title, given, expect: expected } of publishedGroup('E').filter(
    (one) => 'model_order' in one.given,
  )) {
    it(`${id}: ${title}`, () => {
      const value = (name: string) => expected[name].value as number;
      const lags = given.process_lag_time_constants_s.map((lag: number) => [lag, 1]);
      const leads = given.process_zero_time_constants_s.map((lead: number) => [lead, 1]);
      const derivative = given.model_order === 2 ? [[value('derivative_time'), 1]] : [];
      const gain = value('gain');
      const numerator = product([gain * value('integral_time'), gain], ...leads, ...derivative);
      const loop = loopOf(numerator, product([value('integral_time'), 0], ...lags));
      const { stable, sensitivityPeak } = marginsOfLoop(loop, given.process_delay_s);
      expect(stable).toBe(true);
      expectPublished(id, 'sensitivity_peak', sensitivityPeak.value);
      expectPublished(id, 'sensitivity_peak_frequency', sensitivityPeak.frequency!);
    });
  }

  for (const id of ['E12', 'E13', 'E14']) {
    it(`${id}: ${publishedCase(id).title}: its sensitivity peak is the bound`, () => {
      const { given, expect: expected } = publishedCase(id);
      const lags = given.process_lag_time_constants_s.map((lag: number) => [lag, 1]);
      const integrators = new Array(given.integrators + 1).fill([1, 0]);
      given.sensitivity_bounds.forEach((bound: number, k: number) => {
        const gain = (expected.gain.value as number[])[k];
        const integralGain = (expected.integral_gain.value as number[])[k];
        const { sensitivityPeak } = marginsOfLoop(
          loopOf([gain, integralGain], product(...integrators, ...lags)),
        );
        expect(sensitivityPeak.value / bound).toBeCloseTo(1, 9);
        const contact = (expected.contact_frequency.value as number[])[k];
        expect(sensitivityPeak.frequency! / contact).toBeCloseTo(1, 5);
      });
    });
  }

  for (const id of ['E15', 'E16']) {
    it(`${id}: closed-loop damping of the ${publishedCase(id).title.toLowerCase()}`, () => {
      const { numerator, denominator } = publishedCase(id).given;
      const { dampingRatio } = closedLoopDecay(loopOf(numerator, denominator));
      expectPublished(id, 'closed_loop_damping_ratio', dampingRatio);
    });
  }
});
