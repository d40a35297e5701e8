import { describe, expect, it } from 'vitest';
import { measureSmall, type SmallLoop, smallSpecOf, smallValues } from '../small_loop.js';

/**
 * A sampled integrator with k·T = x, opened at its actuator: L = x/(z − 1), closed pole 1 − x. Closed forms over the angle θ:
 * |L| = x/(2·sin(θ/2)), arg L = −π/2 − θ/2 (zero-order hold of an integrator; Åström and Wittenmark 1997).
 */
function integrator(x: number, requirements: string[]): SmallLoop {
  return {
    inputs: 'u: {}',
    plant: 'y: { integral: drive }',
    sensors: 'seen: { of: y }',
    controllers: `law:\n  every: 10 ms\n  signals:\n    command: { value: (${x / 0.01} 1/s)*(u - seen), unit: 1/s }`,
    actuators: 'drive: { of: command, unit: 1/s }',
    requirements: requirements.map((text, i) => `{ name: R${i}, at: drive, ${text} }`),
  };
}

const T = 0.01;
const x = 0.4;
const crossover = (2 * Math.asin(x / 2)) / T;

describe('measures of a sampled integrator', () => {
  it('are those of the closed forms', () => {
    const measures: [string, number][] = [
      ['measure: gain_margin, at_least: 2', 2 / x],
      ['measure: phase_margin, at_least: 1 deg', Math.PI / 2 - (crossover * T) / 2],
      ['measure: delay_margin, at_least: 1 ms', (Math.PI / 2 - (crossover * T) / 2) / crossover],
      ['measure: modulus_margin, at_least: 0.1', 1 - x / 2],
      ['measure: sensitivity_peak, at_most: 6 dB', 1 / (1 - x / 2)],
      ['measure: complementary_peak, at_most: 6 dB', 1],
      // S − 1/2 = (z − 1 − x)/(2(z − 1 + x)), largest at half the sampling frequency.
      ['measure: disc_margin, at_least: 0.1', (2 * (2 - x)) / (2 + x)],
      ['measure: crossover, at_most: 100 Hz', crossover],
      ['measure: lowest_crossover, at_most: 100 rad/s', crossover],
      ['measure: stability, at_least: 1 1/s', -Math.log(1 - x) / T],
      ['measure: least_damping, at_least: 0.1', 1],
      ['measure: hold_phase_loss, at_most: 20 deg', (crossover * T) / 2],
    ];
    const values = smallValues(
      integrator(
        x,
        measures.map(([text]) => text),
      ),
    );
    values.forEach((value, i) => {
      expect(
        Math.abs(value / measures[i][1] - 1),
        `${measures[i][0]}: ${value} for ${measures[i][1]}`,
      ).toBeLessThan(1e-8);
    });
  });

  it('over frequency: the bandwidth, and how often it is sampled', () => {
    const [bandwidth, ratio] = smallValues(
      integrator(x, ['measure: bandwidth, at_least: 1 Hz', 'measure: sampling_ratio, at_least: 10']),
    );
    // |x/(z − 1 + x)|² = 1/2 at cos θ = 1 − x²/(2(1 − x)).
    const expected = Math.acos(1 - x ** 2 / (2 * (1 - x))) / T;
    expect(bandwidth / expected).toBeCloseTo(1, 9);
    expect(ratio / ((2 * Math.PI) / (T * expected))).toBeCloseTo(1, 9);
  });
});

describe('masks over a range of frequencies', () => {
  const sizeOfLoop = (hertz: number): number => x / (2 * Math.sin(Math.PI * hertz * T));

  it('take the worst of the range, its ends included', () => {
    const [single, rollOff, slow, most] = smallValues(
      integrator(x, [
        'measure: largest_loop_gain, frequency: 20 Hz, at_most: 0 dB',
        'measure: largest_loop_gain, from_frequency: 20 Hz, at_most: 0 dB',
        'measure: smallest_loop_gain, to_frequency: 1 Hz, from_frequency: 0.1 Hz, at_least: 10 dB',
        'measure: largest_loop_gain, from_frequency: 10 rad/s, to_frequency: 50 Hz, at_most: 0 dB',
      ]),
    );
    expect(single).toBeCloseTo(sizeOfLoop(20), 9);
    expect(rollOff).toBeCloseTo(sizeOfLoop(20), 9);
    expect(slow).toBeCloseTo(sizeOfLoop(1), 9);
    expect(most).toBeCloseTo(sizeOfLoop(10 / (2 * Math.PI)), 9);
  });

  it('find a peak inside the range, and none of it where the range ends before', () => {
    // Two integrators and a lead: sensitivity with an inner peak. The peak over all frequencies is the sensitivity peak.
    const loop: SmallLoop = {
      ...integrator(x, []),
      plant: 'speed: { integral: drive, unit: 1/s }\ny: { integral: speed }',
      controllers:
        'law:\n  every: 10 ms\n  signals:\n    command: { value: (9 1/s^2)*(u - seen) - (3 1/s)*(seen - before(seen))/(0.01 s), unit: 1/s^2 }',
      actuators: 'drive: { of: command, unit: 1/s^2 }',
      requirements: [
        '{ name: A, at: seen, measure: sensitivity_peak, at_most: 10 }',
        '{ name: B, at: seen, measure: largest_sensitivity, from_frequency: 0.1 Hz, to_frequency: 20 Hz, at_most: 10 }',
        '{ name: C, at: seen, measure: largest_sensitivity, to_frequency: 0.1 Hz, at_most: 10 }',
        '{ name: D, at: seen, measure: largest_sensitivity, frequency: 0.1 Hz, at_most: 10 }',
        '{ name: E, at: seen, measure: largest_following_gain, at_most: 10 }',
        '{ name: F, at: seen, measure: complementary_peak, at_most: 10 }',
      ],
    };
    const [peak, inside, slow, atEnd, following, complementary] = smallValues(loop);
    expect(peak).toBeGreaterThan(1.05);
    expect(inside).toBeCloseTo(peak, 9);
    expect(slow).toBeCloseTo(atEnd, 12);
    expect(slow).toBeLessThan(0.2);
    expect(following).toBeCloseTo(complementary, 9);
  });

  it('do not reach beyond half the sampling frequency', () => {
    const results = measureSmall(
      integrator(x, [
        'measure: largest_loop_gain, from_frequency: 60 Hz, at_most: 0 dB',
        'measure: largest_loop_gain, frequency: 50 Hz, at_most: 0 dB',
        'measure: largest_loop_gain, from_frequency: 20 Hz, to_frequency: 10 Hz, at_most: 0 dB',
        'measure: largest_loop_gain, to_frequency: 51 Hz, at_most: 0 dB',
      ]),
    );
    expect(results.map(({ kind }) => kind)).toEqual(['unformed', 'value', 'unformed', 'unformed']);
    expect(results[3]).toMatchObject({
      why: expect.stringContaining('51 Hz is above half the sampling frequency'),
    });
  });
});

describe('frequencies in a spec', () => {
  it('may be in Hz or rad/s, and nothing else', () => {
    const inHertz = smallSpecOf(integrator(x, ['measure: crossover, at_least: 5 Hz'])).requirements[0];
    expect(inHertz.limit).toEqual({ at_least: 10 * Math.PI });
    expect(inHertz.unit).toMatchObject({ text: 'Hz', scale: 2 * Math.PI });
    const wrong = integrator(x, [
      'measure: crossover, at_least: 5 s',
      'measure: largest_loop_gain, frequency: 2 m, at_most: 0 dB',
    ]);
    expect(() => smallSpecOf(wrong)).toThrow(
      /crossover` must be a frequency in Hz or rad\/s, but this is .*s/,
    );
    expect(() => smallSpecOf(wrong)).toThrow(/`frequency` must be a frequency in Hz or rad\/s/);
  });
});

describe('a cascade of two rates', () => {
  /** The inner loop runs `ratio` times as often as the outer one. */
  const cascade = (ratio: number, at: string, measures: string[]): SmallLoop => ({
    inputs: 'u: {}',
    plant: 'speed: { lag: 50 ms, of: drive, unit: 1/s, gain: 1 1/s }\ny: { integral: speed }',
    sensors: 'fast: { of: speed, unit: 1/s }\nslow: { of: y }',
    controllers: [
      'outer:\n  every: 10 ms\n  signals:\n    wanted: { value: (8 1/s)*(u - slow), unit: 1/s }',
      `inner:\n  every: ${10 / ratio} ms\n  delay: ${2 / ratio} ms\n  signals:\n    command: { value: (2 s)*(wanted - fast) }`,
    ].join('\n'),
    actuators: 'drive: { of: command }',
    requirements: measures.map((text, i) => `{ name: R${i}, at: ${at}, measure: ${text} }`),
  });
  const margins = [
    'gain_margin, at_least: 2',
    'phase_margin, at_least: 30 deg',
    'modulus_margin, at_least: 0.5',
    'disc_margin, at_least: 0.5',
    'sensitivity_peak, at_most: 2',
    'stability, at_least: 0 1/s, scale: 1 1/s',
  ];

  it('has margins at the fast signal, of the lifted loop', () => {
    const values = smallValues(cascade(4, 'drive', margins));
    for (const value of values) expect(Number.isFinite(value) && value > 0).toBe(true);
    const [, , modulus, disc, peak] = values;
    expect(modulus * peak).toBeCloseTo(1, 12);
    // |S − 1/2| is at most |S| + 1/2 and at least |S| − 1/2.
    expect(disc).toBeGreaterThan(1 / (peak + 0.5) - 1e-9);
    expect(disc).toBeLessThan(1 / (peak - 0.5) + 1e-9);
  });

  it('decays alike wherever it is opened', () => {
    const [fast] = smallValues(cascade(4, 'drive', [margins[5]]));
    const [slow] = smallValues(cascade(4, 'slow', [margins[5]]));
    expect(fast / slow).toBeCloseTo(1, 8);
  });

  it('is at the edge of stability with its gain margin on the drive', () => {
    const [factor] = smallValues(cascade(4, 'drive', [margins[0]]));
    const scaled = (by: number): number => {
      const loop = cascade(4, 'drive', [margins[5]]);
      loop.controllers = loop.controllers!.replace('(2 s)', `(${2 * by} s)`);
      return smallValues(loop)[0];
    };
    expect(scaled(factor * 0.999)).toBeGreaterThan(0);
    expect(scaled(factor * 1.001)).toBeLessThan(0);
  });
});
