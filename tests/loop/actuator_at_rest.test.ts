import fc from 'fast-check';
import { describe, expect, it } from 'vitest';
import { measured } from './measured.js';

/**
 * A tank at a rest of 40 mm above the middle of its valve, held there by a proportional-integral law.
 * @param settings of the actuator.
 * @param block further plant signals; `felt` is what the tank takes.
 */
function held(settings: string, block = 'felt: { value: valve }'): Record<string, number> {
  return measured(`
inputs: { target: { unit: mm, rest: 40 mm }, leak: { unit: mm } }
plant:
  ${block}
  level: { lag: 20 s, of: felt*(100 mm) + leak, unit: mm }
sensors: { float: { of: level, filter: 1 s, unit: mm } }
controllers:
  tank:
    every: 1 s
    delay: 0.2 s
    signals:
      error: { value: target - float, unit: mm }
      opening: { pid: { kp: 0.04 1/mm, ki: 0.002 1/(mm*s) }, of: error }
actuators: { valve: { of: opening, ${settings} } }
scenarios: { drip: { lasts: 60 s, inputs: { leak: { step: 0.01 mm, at: 30 s } } } }
requirements:
  - { name: gain, measure: gain_margin, at: valve, at_least: 1.1 }
  - { name: phase, measure: phase_margin, at: valve, at_least: 1 deg }
  - { name: moved, measure: peak_deviation, of: level, to: target, in: drip, at_most: 1 mm }
`);
}

describe('an actuator away from zero at rest', () => {
  const free = held('range: [-1, 1]');

  it('has the margins of one without a dead band, since beyond it the slope is one', () => {
    const banded = held('range: [-1, 1], dead_band: 0.05');
    expect(banded.gain).toBeCloseTo(free.gain, 10);
    expect(banded.phase).toBeCloseTo(free.phase, 10);
    expect(banded.moved).toBeCloseTo(free.moved, 10);
  });

  it('has them with the block `dead_band` too', () => {
    const banded = held('range: [-1, 1]', 'felt: { dead_band: 0.05, of: valve }');
    expect(banded.gain).toBeCloseTo(free.gain, 10);
    expect(banded.moved).toBeCloseTo(free.moved, 10);
  });

  it('rests where one without a slew does, however slow it is, and starts there', () => {
    fc.assert(
      fc.property(fc.double({ min: 1e-4, max: 1, noNaN: true }), (slew) => {
        const slow = held(`range: [-1, 1], slew: ${slew} 1/s`);
        expect(slow.gain).toBeCloseTo(free.gain, 10);
        expect(slow.phase).toBeCloseTo(free.phase, 10);
        // The leak asks for less than 1e-4 a second.
        if (slew > 0.001) expect(slow.moved).toBeCloseTo(free.moved, 10);
        expect(slow.moved).toBeLessThan(0.02);
      }),
      { numRuns: 20 },
    );
  });

  it('is at its slew once the scenario runs: a faster law is slowed down', () => {
    const slow = held('range: [-1, 1], slew: 1e-6 1/s');
    expect(slow.moved).toBeGreaterThan(1.2 * free.moved);
  });
});
