import { describe, expect, it } from 'vitest';
import type { CoefficientValues } from '../../../src/loop/parts.js';
import { measured, resultsOf } from '../measured.js';

const coefficients: CoefficientValues = new Map([
  ['kp', { values: [1.5], format: 'Q2.14', fractionalBits: 14 }],
  ['ki', { values: [328 / 32768], format: 'Q1.15', fractionalBits: 15 }],
]);

/** A first-order plant under proportional and integral action, whose numbers all fit both float64 and the formats. */
function loop(arithmetic: string, step = '0.25'): string {
  return `
firmware: { image: a.elf, coefficients: { kp: kp, ki: ki } }
inputs: { target: {} }
plant: { level: { lag: 0.2 s, of: drive } }
sensors: { seen: { of: level } }
controllers:
  law:
    every: 1 ms
    arithmetic: ${arithmetic}
    signals:
      error: { value: target - seen }
      command: { pid: { kp: kp, ki: ki, gains: per_sample }, of: error }
actuators: { drive: { of: command } }
scenarios: { jump: { lasts: 2 s, inputs: { target: { step: ${step}, at: 0.1 s } } } }
requirements:
  - { name: overshoot, measure: overshoot, of: level, to: target, in: jump, at_most: 90 % }
  - { name: settling, measure: settling_time, of: level, to: target, in: jump, band: 5 %, at_most: 1 s }
  - { name: margin, measure: phase_margin, at: command, at_least: 10 deg }
`;
}

describe('a closed loop in fixed point', () => {
  const real = measured(loop('float64'), { coefficients });
  const fixed = (format: string, more = '', rounding = 'nearest'): Record<string, number> =>
    measured(loop(`{ format: ${format}, rounding: ${rounding}, overflow: saturate${more} }`), {
      coefficients,
    });

  it('moves as the real law does, as near as its step is fine', () => {
    const [coarse, fine] = [fixed('Q1.15'), fixed('Q4.28', ', accumulator: 64 bit')];
    for (const name of ['overshoot', 'settling']) {
      expect(Math.abs(fine[name] / real[name] - 1)).toBeLessThan(1e-4);
      expect(Math.abs(coarse[name] / real[name] - 1)).toBeLessThan(0.02);
      expect(coarse[name]).not.toBe(real[name]);
    }
  });

  it('has the margins of the real law, whose bits it rounds', () => {
    for (const format of ['Q1.15', 'Q2.14', 'Q4.28'])
      expect(fixed(format).margin).toBeCloseTo(real.margin, 9);
  });

  it('does not reach a target where an increment of the integral is cut to zero', () => {
    // ki times the error is less than one step of the format below an error of 100 steps; only float64 removes it.
    const truncated = resultsOf(
      loop('{ format: Q1.15, rounding: toward_zero, overflow: saturate }', '0.002').replace(
        'band: 5 %',
        'band: 1 %',
      ),
      { coefficients },
    );
    expect(truncated.settling.kind).toBe('never');
    const exact = resultsOf(loop('float64', '0.002').replace('band: 5 %', 'band: 1 %'), { coefficients });
    expect(exact.settling.kind).toBe('value');
  });

  it('stays at the end of its format where the law asks for more', () => {
    const results = resultsOf(loop('{ format: Q1.15, rounding: nearest, overflow: saturate }', '1.5'), {
      coefficients,
    });
    // The target is held at the format's largest number, below the 5 % band of what was asked for.
    expect(results.settling.kind).toBe('never');
  });
});
