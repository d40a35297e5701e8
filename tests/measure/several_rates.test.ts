import { describe, expect, it } from 'vitest';
import { measureSmall, numberOf, type SmallLoop, smallValues } from '../small_loop.js';

const measures = [
  'gain_margin, at_least: 2',
  'phase_margin, at_least: 30 deg',
  'delay_margin, at_least: 1 ms',
  'modulus_margin, at_least: 0.5',
  'disc_margin, at_least: 0.5',
  'sensitivity_peak, at_most: 2',
  'complementary_peak, at_most: 2',
  'crossover, at_least: 1 Hz',
  'lowest_crossover, at_least: 1 Hz',
  'bandwidth, at_least: 1 Hz',
  'sampling_ratio, at_least: 10',
  'hold_phase_loss, at_most: 10 deg',
  'largest_loop_gain, from_frequency: 20 Hz, at_most: 0 dB',
  'largest_loop_gain, frequency: 90 Hz, at_most: 0 dB',
  'smallest_loop_gain, from_frequency: 0.3 Hz, to_frequency: 2 Hz, at_least: 0 dB',
  'largest_sensitivity, to_frequency: 3 Hz, at_most: 0 dB',
  'largest_sensitivity, from_frequency: 3 Hz, at_most: 6 dB',
  'largest_following_gain, from_frequency: 7 Hz, at_most: 0 dB',
  'stability, at_least: 0 1/s, scale: 1 1/s',
  'least_damping, at_least: 0.2',
];

/** A plant of second order under a law with a derivative, whatever runs beside it. */
const axis = (beside: string): SmallLoop => ({
  inputs: 'u: {}',
  plant: 'speed: { lag: 50 ms, of: drive, unit: 1/s, gain: 1 1/s }\ny: { integral: speed }',
  sensors: `seen: { of: y }${beside ? '\nwatched: { of: speed, unit: 1/s }' : ''}`,
  controllers: `law:\n  every: 5 ms\n  delay: 2 ms\n  signals:\n    command: { value: 20*(u - seen) - (0.5 s)*(seen - before(seen))/(5 ms) }${beside}`,
  actuators: 'drive: { of: command }',
  requirements: [],
});

const atDrive = (loop: SmallLoop, list: readonly string[] = measures): SmallLoop => ({
  ...loop,
  requirements: list.map((text, i) => `{ name: R${i}, at: drive, measure: ${text} }`),
});

describe('a slow controller that takes no part', () => {
  // It makes the cycle of all controllers longer, so that the loop is lifted: nothing else may change.
  it.each([2, 3, 5])('changes no measure of the fast loop, where it runs every %i-th time', (ratio) => {
    const beside = `\nwatch:\n  every: ${5 * ratio} ms\n  signals:\n    mean: { value: (watched + before(watched))/2, unit: 1/s }`;
    const alone = smallValues(atDrive(axis('')));
    const together = smallValues(atDrive(axis(beside)));
    alone.forEach((value, i) => {
      // A motion that is nearly over within the cycle has lost digits at its end.
      const within = measures[i].startsWith('least_damping') ? 1e-5 : 1e-8;
      expect(Math.abs(together[i] / value - 1), `${measures[i]}: ${together[i]} for ${value}`).toBeLessThan(
        within,
      );
    });
    expect(alone.every(Number.isFinite)).toBe(true);
  });
});

describe('a cascade of two rates', () => {
  /** The inner loop runs `ratio` times as often as the outer one, its results so many ms late. */
  const cascade = (ratio: number, delay = 2 / ratio, list = measures): SmallLoop =>
    atDrive(
      {
        inputs: 'u: {}',
        plant: 'speed: { lag: 50 ms, of: drive, unit: 1/s, gain: 1 1/s }\ny: { integral: speed }',
        sensors: 'fast: { of: speed, unit: 1/s }\nslow: { of: y }',
        controllers: [
          'outer:\n  every: 10 ms\n  signals:\n    wanted: { value: (8 1/s)*(u - slow), unit: 1/s }',
          `inner:\n  every: ${10 / ratio} ms\n  delay: ${delay} ms\n  signals:\n    command: { value: (6 s)*(wanted - fast) }`,
        ].join('\n'),
        actuators: 'drive: { of: command }',
        requirements: [],
      },
      list,
    );

  it('has every measure at the fast signal', () => {
    const results = measureSmall(cascade(4));
    for (const [i, result] of results.entries()) expect(result.kind, measures[i]).toBe('value');
    const of = (name: string): number =>
      numberOf(results[measures.findIndex((text) => text.startsWith(name))]);
    expect(of('sampling_ratio') * of('bandwidth')).toBeCloseTo((2 * Math.PI) / 0.0025, 6);
    expect(of('hold_phase_loss')).toBeCloseTo((of('crossover') * 0.0025) / 2, 12);
    expect(of('largest_sensitivity, from')).toBeLessThanOrEqual(of('sensitivity_peak') * (1 + 1e-9));
    // No sine is worse than the worst of all signals, and here no other signal is much worse.
    expect(of('largest_sensitivity, from')).toBeGreaterThan(0.9 * of('sensitivity_peak'));
    expect(of('least_damping')).toBeGreaterThan(0);
    expect(of('least_damping')).toBeLessThan(1);
  });

  it.each([
    [1, 0.05],
    [2, 0.05],
    [4, 0.01],
    [8, 0.002],
  ])(
    'is at the edge with its delay margin as a delay of the inner law, %i times as fast',
    (ratio, within) => {
      // A held value that comes a part of a period later is not the same sine later, but nearly so where the hold is short: at
      // one rate the difference is 4 %.
      const [margin] = smallValues(cascade(ratio, 0.5, [measures[2]]));
      const stabilityWith = (share: number): number =>
        smallValues(
          cascade(ratio, 0.5 + share * margin * 1000, ['stability, at_least: 0 1/s, scale: 1 1/s']),
        )[0];
      expect(stabilityWith(1 - within)).toBeGreaterThan(0);
      expect(stabilityWith(1 + within)).toBeLessThan(0);
    },
  );

  it('has no margin, a negative damping and still its crossovers where it is unstable', () => {
    const loop = cascade(4, 6);
    loop.controllers = loop.controllers!.replace('(6 s)', '(20 s)');
    const values = Object.fromEntries(smallValues(loop).map((value, i) => [measures[i], value]));
    expect(values[measures[2]]).toBe(0);
    for (const name of measures.filter((text) => /^(bandwidth|sampling_ratio)/.test(text))) {
      expect(values[name], name).toBe(0);
    }
    for (const name of measures.filter((text) => /^largest_(sensitivity|following)/.test(text))) {
      expect(values[name], name).toBe(Number.POSITIVE_INFINITY);
    }
    for (const name of measures.filter((text) => /^(stability|least_damping)/.test(text))) {
      expect(values[name], name).toBeLessThan(0);
    }
    for (const name of measures.filter((text) => /crossover|loop_gain|hold/.test(text))) {
      expect(values[name], name).toBeGreaterThan(0);
      expect(values[name], name).toBeLessThan(Number.POSITIVE_INFINITY);
    }
  });

  it('has the damping of its oscillation after a step', () => {
    // One pair of poles rules the response: the logarithmic decrement of the speed is 2πζ/√(1 − ζ²) a period.
    const loop = cascade(4, 0.5, ['least_damping, at_least: 0.01']);
    loop.controllers = loop.controllers!.replace('(8 1/s)', '(80 1/s)');
    loop.scenarios = 'step: { lasts: 2 s, inputs: { u: { step: 1, at: 10 ms } } }';
    loop.requirements.push('{ name: D, in: step, measure: decay_ratio, of: y, to: u, at_most: 1 }');
    const [damping, ratio] = smallValues(loop);
    expect(Math.exp((-2 * Math.PI * damping) / Math.sqrt(1 - damping ** 2)) / ratio).toBeCloseTo(1, 1);
  });
});
