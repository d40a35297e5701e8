import { describe, expect, it } from 'vitest';
import { marginsOfLoop } from '../../src/linear/margins.js';
import { randomLoop, repeatable } from '../linear/loops.js';
import { expectPublished, publishedCase } from '../published.js';
import { smallSpecOf } from '../small_loop.js';

const degrees = 180 / Math.PI;

/** What a bound on |S| guarantees (Skogestad and Postlethwaite 2005). */
const bySensitivity = (peak: number) => ({
  up: peak / (peak - 1),
  down: peak / (peak + 1),
  phase: 2 * Math.asin(1 / (2 * peak)),
});

/** What a bound on |L/(1 + L)| guarantees. */
const byComplementary = (peak: number) => ({ up: 1 + 1 / peak, phase: 2 * Math.asin(1 / (2 * peak)) });

describe('margins guaranteed by peaks', () => {
  it('are the published ones (K02, K03)', () => {
    const own = publishedCase('K02').given.sensitivity_peaks.map(bySensitivity);
    expectPublished(
      'K02',
      'gain_margin_at_least',
      own.map(({ up }: { up: number }) => up),
    );
    expectPublished(
      'K02',
      'gain_reduction_at_least',
      own.map(({ down }: { down: number }) => down),
    );
    expectPublished(
      'K02',
      'phase_margin_at_least',
      own.map(({ phase }: { phase: number }) => phase * degrees),
    );
    expectPublished('K02', 'gain_margin_for_peak_two', bySensitivity(2).up);
    expectPublished('K02', 'phase_margin_for_peak_two', bySensitivity(2).phase * degrees);
    const other = publishedCase('K03').given.complementary_sensitivity_peaks.map(byComplementary);
    expectPublished(
      'K03',
      'gain_margin_at_least',
      other.map(({ up }: { up: number }) => up),
    );
    expectPublished(
      'K03',
      'phase_margin_at_least',
      other.map(({ phase }: { phase: number }) => phase * degrees),
    );
  });

  it('are kept by every stable loop of two hundred', () => {
    const random = repeatable(7);
    let stable = 0;
    for (let k = 0; k < 200; k++) {
      const margins = marginsOfLoop(randomLoop(1 + (k % 6), random));
      if (!margins.stable) continue;
      stable++;
      const slack = 1 - 1e-9;
      const [s, t] = [margins.sensitivityPeak.value, margins.complementaryPeak.value];
      if (s > 1) {
        const least = bySensitivity(s);
        expect(margins.gainMargin.up).toBeGreaterThanOrEqual(least.up * slack);
        expect(margins.gainMargin.down).toBeLessThanOrEqual(least.down / slack);
        expect(margins.phaseMargin).toBeGreaterThanOrEqual(least.phase * slack);
      }
      if (2 * t > 1) expect(margins.phaseMargin).toBeGreaterThanOrEqual(byComplementary(t).phase * slack);
      expect(margins.gainMargin.up).toBeGreaterThanOrEqual(byComplementary(t).up * slack);
    }
    expect(stable).toBeGreaterThan(50);
  });
});

describe('common floors as limits of a spec (K01)', () => {
  it('are what the spec makes of 6 dB and 45 deg', () => {
    const { gain_margin_floor_dB: decibels, phase_margin_floor_deg: angle } = publishedCase('K01').given;
    const { requirements } = smallSpecOf({
      inputs: 'u: {}',
      plant: 'y: { lag: 1 s, of: drive }',
      sensors: 'seen: { of: y }',
      controllers: 'law:\n  every: 0.1 s\n  signals:\n    command: { value: u - seen }',
      actuators: 'drive: { of: command }',
      requirements: [
        `{ name: A, measure: gain_margin, at: drive, at_least: ${decibels} dB }`,
        `{ name: B, measure: gain_margin, at: drive, at_least: -${decibels} dB }`,
        `{ name: C, measure: phase_margin, at: drive, at_least: ${angle} deg }`,
      ],
    });
    const limits = requirements.map(({ limit }) => ('at_least' in limit ? limit.at_least : Number.NaN));
    expectPublished('K01', 'gain_factor_up', limits[0]);
    expectPublished('K01', 'gain_factor_down', limits[1]);
    expectPublished('K01', 'phase_margin_rad', limits[2]);
    expectPublished('K01', 'factor_two_in_dB', (decibels * Math.log(2)) / Math.log(limits[0]));
  });
});
