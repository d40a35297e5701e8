import { describe, expect, it } from 'vitest';
import { measured, resultsOf } from './measured.js';

/** A ramp of 2 m/s from 0.1 s on, read every 10 ms by a sensor with the given settings. */
function read(sensor: string, requirements: string[], controller = ''): number[] {
  const results = measured(
    `
inputs: { way: { unit: m } }
plant: { place: { value: way, unit: m } }
sensors: { gauge: { of: place, unit: m, ${sensor} } }
controllers: { reader: { every: 10 ms, ${controller} signals: { copy: { value: gauge, unit: m } } } }
scenarios: { go: { lasts: 10.1 s, inputs: { way: { ramp: 2 m/s, at: 0.1 s } } } }
requirements:
${requirements.map((line, i) => `  - { name: r${i}, in: go, ${line} }`).join('\n')}
`,
    { halvings: 1 },
  );
  return Object.values(results);
}

const lateness = 'measure: absolute_deviation_integral, of: gauge, to: place, at_most: 90 m*s';
const farthest = 'measure: peak_deviation, of: gauge, to: place, at_most: 90 m';
const noise = 'measure: rms_deviation, of: gauge, to: other, at_most: 90 m';

/** A still signal read for 20 s with noise. */
function noisy(settings: string): { rms: number; travel: number } {
  const { rms, travel } = measured(`
inputs: { other: { unit: m }, kick: { unit: m } }
plant: { place: { value: kick*0, unit: m } }
sensors: { gauge: { of: place, unit: m, noise: ${settings} } }
controllers: { reader: { every: 10 ms, signals: { copy: { value: gauge + 0*other, unit: m } } } }
scenarios: { go: { lasts: 200 s, inputs: { kick: { step: 1 m, at: 0 s } } } }
requirements:
  - { name: rms, in: go, ${noise} }
  - { name: travel, in: go, measure: travel, of: gauge, at_most: 90 km }
`);
  return { rms, travel };
}

describe('a sensor', () => {
  it('holds its sample: on a ramp it is late by half a period on average and a whole one at most', () => {
    const [sum, most] = read('gain: 1', [lateness, farthest]);
    expect(most).toBeCloseTo(2 * 0.01, 10);
    expect(sum).toBeCloseTo(2 * 0.005 * 10, 8);
  });

  it('with a dead time reads exactly what was', () => {
    const [sum, most] = read('dead_time: 123.4 ms', [lateness, farthest]);
    expect(most).toBeCloseTo(2 * (0.1234 + 0.01), 9);
    // Until it has seen the whole dead time of the ramp it lags by the way covered so far: half of it on average.
    expect(sum).toBeCloseTo(2 * (0.1234 + 0.005) * 10 - 2 * 0.1234 * (0.1234 / 2 + 0.005), 3);
  });

  it('drifts from the start of the scenario on', () => {
    const [most] = read('drift: -30 mm/s', [farthest]);
    // The last sample, at 10.09 s or just before the end, has drifted for as long.
    expect(most).toBeGreaterThan(0.03 * 10.09);
    expect(most).toBeLessThan(0.03 * 10.1 + 0.02 + 1e-9);
  });

  it('loses its share of the samples: each loss adds a period of lateness', () => {
    const [sum] = read('drops: 20 %', [lateness]);
    // Runs of losses are geometric with mean p/(1 − p); three deviations of the mean over 1,000 samples.
    const expected = 2 * 0.01 * (0.5 + 0.2 / 0.8) * 10;
    const deviation = 2 * 0.01 * 10 * Math.sqrt(((0.2 / 0.8 ** 2) * 3) / 1000);
    expect(Math.abs(sum - expected)).toBeLessThan(3 * deviation);
  });

  it('sticks between two times', () => {
    const [most] = read('stuck: { from: 2 s, to: 3.005 s }', [farthest]);
    // The last good sample is that of 1.99 s, the next one that of 3.01 s.
    expect(most).toBeCloseTo(2 * (3.01 - 1.99), 9);
  });

  it('has noise of the stated deviation, white or with a corner', () => {
    const white = noisy('0.3 m');
    const slow = noisy('{ deviation: 0.3 m, corner: 1 Hz }');
    // 20,000 draws; with the corner neighbours are alike (e^{−2π·0.01} = 0.94), so that only some 600 are independent.
    expect(Math.abs(white.rms / 0.3 - 1)).toBeLessThan(3 / Math.sqrt(2 * 20_000));
    expect(Math.abs(slow.rms / 0.3 - 1)).toBeLessThan(3 / Math.sqrt(2 * 600));
    // Mean step of two normal values with correlation r: 2σ·√((1 − r)/π).
    const correlation = Math.exp(-2 * Math.PI * 0.01);
    expect(slow.travel / white.travel).toBeCloseTo(Math.sqrt(1 - correlation), 1);
  });

  it('of a controller with jitter is sampled late by up to the jitter, the same in every run', () => {
    const [[most], [again]] = [0, 1].map(() => read('gain: 1', [farthest], 'jitter: 3 ms,'));
    expect(most).toBeGreaterThan(2 * 0.0125);
    expect(most).toBeLessThanOrEqual(2 * 0.013);
    expect(again).toBe(most);
  });
});

/** A loop with a given actuator and delay; its margins and the largest and smallest felt value after a step. */
const withActuator = (actuator: string, delay: string): string => `
inputs: { target: { unit: rad } }
plant:
  speed: { integral: (30 1/s^2)*drive - (2 1/s)*speed, unit: rad/s }
  angle: { integral: speed, unit: rad }
sensors: { encoder: { of: angle, filter: 4 ms, unit: rad } }
controllers: { axis: { every: 10 ms, delay: ${delay}, signals: { push: { value: 0.8*(target - encoder), unit: rad } } } }
actuators: { drive: { of: push, unit: rad, ${actuator} } }
scenarios: { jump: { lasts: 8 s, inputs: { target: { step: 1 rad, at: 0 s } } } }
requirements:
  - { name: gain, measure: gain_margin, at: drive, at_least: 1.1 }
  - { name: top, measure: largest_value, of: drive, in: jump, at_most: 9 rad }
  - { name: rate, measure: slew_rate, of: drive, in: jump, at_most: 90 rad/s }
  - { name: overshoot, measure: overshoot, of: angle, to: target, in: jump, at_most: 90 % }
  - { name: when, measure: time_of_largest_value, of: drive, in: jump, at_most: 9 s }
`;

const acting = (actuator: string, delay: string): Record<string, number> =>
  measured(withActuator(actuator, delay));

describe('an actuator', () => {
  it('updated at the middle or the start of a period is as late as the next one', () => {
    for (const [update, delay, same] of [
      ['middle', '2 ms', '5 ms'],
      ['start', '2 ms', '10 ms'],
      ['middle', '5 ms', '5 ms'],
      ['middle', '6 ms', '15 ms'],
      ['start', '0 s', '0 s'],
    ]) {
      const updated = acting(`update: ${update}`, delay);
      const delayed = acting('range: [-9 rad, 9 rad]', same);
      expect(updated.gain, `${update} ${delay}`).toBeCloseTo(delayed.gain, 10);
      expect(updated.overshoot, `${update} ${delay}`).toBeCloseTo(delayed.overshoot, 10);
    }
  });

  it('with reduced effect acts as a smaller gain: the margin grows by as much', () => {
    const [whole, half] = ['effect: 1', 'effect: 0.5'].map((actuator) => acting(actuator, '1 ms').gain);
    expect(half / whole).toBeCloseTo(2, 10);
  });

  it('climbs no faster than its slew: by slew times period in each step', () => {
    const { top, when } = acting('slew: 4 rad/s', '0 s');
    // The controller asks for 0.8 rad at once; the actuator follows by 0.04 rad every 10 ms while the request falls.
    expect(top).toBeGreaterThan(0.3);
    expect(top).toBeLessThan(0.8);
    expect(top / 0.04 - 1).toBeCloseTo(when / 0.01, 6);
  });

  it('does nothing inside its dead band', () => {
    expect(resultsOf(withActuator('dead_band: 0.9 rad', '0 s')).top).toMatchObject({ value: 0 });
    const { top, gain } = resultsOf(withActuator('dead_band: 0.3 rad', '0 s'));
    expect((top as { value: number }).value).toBeCloseTo(0.5, 12);
    expect(gain).toMatchObject({ kind: 'unformed', why: expect.stringContaining('as inside a dead band') });
  });
});

describe('pulse-width modulation', () => {
  // A lag of time constant τ behind a switch of duty d and period T swings by
  // (1 − e^{−dT/τ})·(1 − e^{−(1−d)T/τ})/(1 − e^{−T/τ}) of the supply in the steady state (from the two exponentials of a period).
  const spec = (pwm: string): string => `
inputs: { share: { unit: "%", rest: 0 } }
plant: { current: { lag: 5 ms, of: bridge, gain: 10 A/V, unit: A } }
sensors: { shunt: { of: current, unit: A } }
controllers: { axis: { every: 2 ms, signals: { duty: { value: 0.3*(1 V) + shunt*0*(1 V/A) + share*0*(1 V), unit: V } } } }
actuators: { bridge: { of: duty, unit: V, range: [0 V, 1 V], ${pwm} } }
scenarios: { on: { start: zero, lasts: 0.2 s, inputs: { share: { step: 10 %, at: 0 s } } } }
requirements:
  - { name: swing, measure: oscillation_amplitude, of: current, from: 0.15 s, until: 0.19 s, in: on, at_most: 9 A }
  - { name: top, measure: largest_value, of: current, in: on, at_most: 90 A }
`;
  const [d, T, tau] = [0.3, 2e-3, 5e-3];
  const swing =
    ((1 - Math.exp((-d * T) / tau)) * (1 - Math.exp((-(1 - d) * T) / tau))) / (1 - Math.exp(-T / tau));

  it('with its ripple swings as the closed form says', () => {
    const results = resultsOf(spec('pwm: ripple'), { halvings: 3 });
    expect((results.swing as { value: number }).value).toBeCloseTo((10 * swing) / 2, 7);
  });

  it('as its mean does not', () => {
    const { top } = resultsOf(spec('pwm: mean'), { halvings: 1 });
    expect((top as { value: number }).value).toBeCloseTo(3, 6);
  });
});
