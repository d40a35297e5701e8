import { describe, expect, it } from 'vitest';
import { measureSmall, type SmallLoop, smallValues } from '../small_loop.js';

/** A proportional loop around an integrator with a limit on its effort: unstable for k·period above 2. */
function integrator(k: number, requirements: string[], more: Partial<SmallLoop> = {}): SmallLoop {
  return {
    inputs: 'u: {}',
    plant: 'y: { integral: drive }',
    sensors: 'seen: { of: y }',
    controllers: `law:\n  every: 100 ms\n  signals:\n    command: { value: (${k} 1/s)*(u - seen), unit: 1/s }`,
    actuators: 'drive: { of: command, unit: 1/s }',
    scenarios: 'run: { lasts: 10 s, inputs: { u: { step: 1, at: 0.5 s } } }',
    requirements: requirements.map((text, i) => `{ name: R${i}, ${text} }`),
    ...more,
  };
}

const margins = [
  'measure: gain_margin, at: drive, at_least: 2',
  'measure: phase_margin, at: drive, at_least: 30 deg',
  'measure: delay_margin, at: drive, at_least: 1 ms',
  'measure: modulus_margin, at: drive, at_least: 0.5',
  'measure: disc_margin, at: drive, at_least: 0.5',
  'measure: sensitivity_peak, at: drive, at_most: 2',
  'measure: complementary_peak, at: drive, at_most: 2',
  'measure: bandwidth, at: drive, at_least: 1 Hz',
];

describe('an unstable loop', () => {
  it('has no margins at all, and says so', () => {
    const results = measureSmall(integrator(25, margins));
    const note = 'the closed loop is unstable';
    const values = [1, 0, 0, 0, 0, Number.POSITIVE_INFINITY, Number.POSITIVE_INFINITY, 0];
    expect(results).toEqual(values.map((value) => ({ kind: 'value', value, note })));
  });

  it('has a finite trace all the same while it grows, and is measured on it', () => {
    // k·T = 2.05: y − 1 grows by −1.05 a sample.
    const [peak, settling, reserve] = measureSmall(
      integrator(20.5, [
        'in: run, measure: largest_value, of: y, at_most: 1',
        'in: run, measure: settling_time, of: y, to: u, band: 5 %, at_most: 1 s',
        'measure: stability, at: drive, at_least: 0 1/s',
      ]),
    );
    // The step is sampled at 0.5 s; y(n) − 1 = −(−1.05)ⁿ, largest at the last odd n = 95.
    expect(peak.kind === 'value' && peak.value).toBeCloseTo(1 + 1.05 ** 95, 6);
    expect(settling.kind).toBe('never');
    expect(reserve.kind === 'value' && reserve.value).toBeCloseTo(-Math.log(1.05) / 0.1, 9);
  });

  it('whose trace leaves the finite numbers is never measured', () => {
    // Grows 9999-fold a sample: beyond 1e100 after 26 samples.
    const results = measureSmall(
      integrator(100000, [
        'in: run, measure: smallest_value, of: y, at_least: 0',
        'in: run, measure: overshoot, of: y, to: u, at_most: 1',
      ]),
    );
    expect(results.map(({ kind }) => kind)).toEqual(['overflow', 'overflow']);
  });
});

describe('margins without a crossing', () => {
  it('are infinite', () => {
    // A lag with a loop gain of 0.5 at most has no gain crossover; sampled, it is real and negative at half the sampling
    // frequency only.
    const loop = integrator(
      0,
      [...margins.slice(0, 3), 'measure: crossover, at: drive, at_least: 0 Hz, scale: 1 Hz'],
      {
        plant: 'y: { lag: 1 s, of: drive }',
        controllers: 'law:\n  every: 100 ms\n  signals:\n    command: { value: 0.5*(u - seen) }',
        actuators: 'drive: { of: command }',
      },
    );
    const [gain, phase, delay, crossover] = smallValues(loop);
    expect(phase).toBe(Number.POSITIVE_INFINITY);
    expect(delay).toBe(Number.POSITIVE_INFINITY);
    expect(crossover).toBe(0);
    // L(−1) = −0.5·(1 − a)/(1 + a), a = e^{−0.1}.
    const a = Math.exp(-0.1);
    expect(gain).toBeCloseTo((1 + a) / (0.5 * (1 - a)), 8);
  });

  it('are unjudged where nothing is fed back: they would be infinite, and would pass', () => {
    const loop = integrator(0, [margins[0]], {
      controllers:
        'law:\n  every: 100 ms\n  signals:\n    command: { value: (1 1/s)*u + 0*(1 1/s)*seen, unit: 1/s }',
    });
    const [result] = measureSmall(loop);
    expect(result).toMatchObject({
      kind: 'unformed',
      why: expect.stringMatching(
        /^nothing of what goes out at 'drive' returns: the loop is open at the point/,
      ),
    });
  });
});

describe('a sensor that saturates', () => {
  it('leaves the loop without its feedback at the end of its range, and the margins unjudged there', () => {
    const loop = integrator(
      5,
      [
        'in: run, measure: largest_value, of: y, at_most: 1',
        'in: run, measure: saturated_share, of: seen, at_most: 1',
        'measure: phase_margin, at: drive, around: { y: 0.7 }, at_least: 30 deg',
        'measure: phase_margin, at: drive, at_least: 30 deg',
      ],
      { sensors: 'seen: { of: y, range: [-0.5, 0.5] }' },
    );
    const [peak, share, outside, inside] = measureSmall(loop);
    // seen sticks at 0.5, so that y climbs by 5·0.5·0.1 a sample to the end.
    expect(peak.kind === 'value' && peak.value).toBeGreaterThan(20);
    expect(share.kind === 'value' && share.value).toBeGreaterThan(0.9);
    expect(outside.kind).toBe('unformed');
    expect(outside.kind === 'unformed' && outside.why).toContain("'seen' is at the end of a range");
    expect(inside.kind).toBe('value');
  });
});

describe('a signal that stays still', () => {
  it('has the measures of stillness', () => {
    const still: SmallLoop = integrator(
      5,
      [
        'in: still, measure: travel, of: drive, at_most: 1 1/s',
        'in: still, measure: reversals_per_second, of: drive, at_most: 1 1/s',
        'in: still, measure: slew_rate, of: drive, at_most: 1 1/s^2',
        'in: still, measure: activity, of: drive, at_most: 1 1/s',
        'in: still, measure: peak_deviation, of: y, to: u, at_most: 1',
      ],
      { scenarios: 'still: { lasts: 2 s }' },
    );
    expect(smallValues(still)).toEqual([0, 0, 0, 0, 0]);
  });
});
