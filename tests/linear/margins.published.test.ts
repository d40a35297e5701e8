import { describe, expect, it } from 'vitest';
import { marginsOfLoop } from '../../src/linear/margins.js';
import { expectPublished, publishedCase } from '../published.js';
import { stateEquationsOf } from './polynomial_ratio.js';

const DEGREES = 180 / Math.PI;

function publishedMargins(id: string) {
  const { given } = publishedCase(id);
  const { numerator, denominator, delay_s: delay, sampling_period_s: period } = given;
  return marginsOfLoop(stateEquationsOf({ numerator, denominator, period }), delay ?? 0);
}

// Each case names its own source: reference/published/README.md.
describe('margins of published loops', () => {
  const figures: Record<string, (margins: ReturnType<typeof marginsOfLoop>) => number | number[]> = {
    gain_margin: ({ gainMargin }) => gainMargin.up,
    gain_reduction_margin: ({ gainMargin }) => gainMargin.down,
    phase_margin: ({ phaseMargin }) => phaseMargin * DEGREES,
    gain_crossover: ({ gainCrossings }) => gainCrossings[0].frequency,
    gain_crossovers: ({ gainCrossings }) => gainCrossings.map(({ frequency }) => frequency),
    phase_margins: ({ gainCrossings }) => gainCrossings.map(({ phaseMargin }) => phaseMargin * DEGREES),
    phase_crossover: ({ phaseCrossings }) => phaseCrossings[0].frequency,
    reduction_phase_crossover: ({ phaseCrossings }) => phaseCrossings[0].frequency,
    delay_margin: ({ delayMargin }) => delayMargin,
    sensitivity_peak: ({ sensitivityPeak }) => sensitivityPeak.value,
    sensitivity_peak_frequency: ({ sensitivityPeak }) => sensitivityPeak.frequency!,
    modulus_margin: ({ modulusMargin }) => modulusMargin,
    complementary_sensitivity_peak: ({ complementaryPeak }) => complementaryPeak.value,
  };
  const ids = ['D01', 'D02', 'D03', 'D04', 'D05', 'D06', 'D08', 'D09', 'D10', 'E15', 'E16'];
  for (const id of ids) {
    const { title, expect: expected } = publishedCase(id);
    it(`${id}: ${title}`, () => {
      const margins = publishedMargins(id);
      expect(margins.stable).toBe(true);
      const names = Object.keys(expected).filter((name) => name in figures);
      expect(names.length).toBeGreaterThan(1);
      for (const name of names) expectPublished(id, name, figures[name](margins));
    });
  }
});
