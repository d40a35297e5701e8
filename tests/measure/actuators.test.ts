import { describe, expect, it } from 'vitest';
import { expectPublished, publishedCase } from '../published.js';
import { measureSmall, type SmallLoop, smallValues } from '../small_loop.js';

/** A controller that hands its input on to an actuator every 10 ms, without delay. */
function handedOn(requirements: string[], events: string, { range = '[-1, 1]', lasts = 10 } = {}): SmallLoop {
  return {
    inputs: 'u: {}\nbias: {}',
    plant: 'y: { lag: 0.5 s, of: drive }',
    sensors: 'seen: { of: y }',
    controllers: 'law:\n  every: 10 ms\n  signals:\n    command: { value: u + bias + 0*seen }',
    actuators: `drive: { of: command, range: ${range} }`,
    scenarios: `run: { lasts: ${lasts} s, inputs: { ${events} } }`,
    requirements: requirements.map((text, i) => `{ name: R${i}, in: run, ${text} }`),
  };
}

/** 0.5 from 1 s to 3 s, then 2 (held at 1) from 4 s to 5 s, then 0. */
const twoPulses = 'u: [{ pulse: 0.5, at: 1 s, for: 2 s }, { pulse: 2, at: 4 s, for: 1 s }]';

describe('an actuator that moves by steps', () => {
  it('has the effort, travel and time at its limit of its steps', () => {
    const values = smallValues(
      handedOn(
        [
          'measure: peak_effort, of: drive, at_most: 1',
          'measure: rms_effort, of: drive, at_most: 1',
          'measure: travel, of: drive, at_most: 1',
          'measure: saturated_share, of: drive, at_most: 1',
          'measure: longest_time_at_limit, of: drive, at_most: 1 s',
          'measure: reversals_per_second, of: drive, at_most: 1 1/s',
          'measure: slew_rate, of: drive, at_most: 1 1/s',
        ],
        twoPulses,
      ),
    );
    // From the first event at 1 s: 9 s. Ways 0.5 + 0.5 + 1 + 1; turned at the top of each pulse and between them.
    const expected = [1, Math.sqrt((2 * 0.25 + 1) / 9), 3, 1 / 9, 1, 3 / 9, 1 / 0.01];
    values.forEach((value, i) => {
      expect(value).toBeCloseTo(expected[i], 9);
    });
  });

  it('counts only the reversals that are followed by enough of a move', () => {
    const [few] = smallValues(
      handedOn(['measure: reversals_per_second, of: drive, beyond: 0.7, at_most: 1 1/s'], twoPulses),
    );
    expect(few).toBeCloseTo(1 / 9, 12);
  });

  it('has the duty of its worst stretch', () => {
    // The pulses' areas: 1 in 1 s … 3 s, 1 in 4 s … 5 s. Any 4 s from 1 s on hold both: 2/4.
    const [short, long, whole] = smallValues(
      handedOn(
        [
          'measure: duty, of: drive, over: 0.5 s, at_most: 1',
          'measure: duty, of: drive, over: 4 s, at_most: 1',
          'measure: duty, of: drive, over: 9 s, at_most: 1',
        ],
        twoPulses,
      ),
    );
    expect(short).toBeCloseTo(1, 12);
    expect(long).toBeCloseTo(0.5, 12);
    expect(whole).toBeCloseTo(2 / 9, 12);
  });

  it('has a share of its larger end of range as duty', () => {
    const [share] = smallValues(
      handedOn(['measure: duty, of: drive, over: 1 s, at_most: 1'], 'u: { step: -2, at: 1 s }', {
        range: '[-4, 1]',
      }),
    );
    expect(share).toBeCloseTo(0.5, 12);
  });

  it('needs a range for what is counted against it, and a window as long as the stretch', () => {
    const loop = handedOn(
      [
        'measure: saturated_share, of: y, at_most: 1',
        'measure: longest_time_at_limit, of: y, at_most: 1 s',
        'measure: duty, of: y, over: 1 s, at_most: 1',
        'measure: duty, of: drive, over: 11 s, at_most: 1',
      ],
      twoPulses,
    );
    const why = 'the signal has no range';
    expect(measureSmall(loop)).toEqual([
      { kind: 'unformed', why },
      { kind: 'unformed', why },
      { kind: 'unformed', why },
      { kind: 'unformed', why: '`over` (11 s) is longer than the window' },
    ]);
  });
});

describe('a moving signal', () => {
  it('has its largest rate, and an infinite one where it jumps', () => {
    // A lag of 0.5 s towards 1 starts with a rate of 2/s.
    const [rate, jump] = smallValues({
      inputs: 'u: {}',
      plant: 'y: { lag: 0.5 s, of: u }\nz: { value: y + u }',
      scenarios: 'run: { lasts: 5 s, inputs: { u: { step: 1, at: 1 s } } }',
      requirements: [
        '{ name: A, in: run, measure: slew_rate, of: y, at_most: 1 1/s }',
        '{ name: B, in: run, measure: slew_rate, of: z, at_most: 1 1/s }',
      ],
    });
    expect(rate).toBeCloseTo(2, 9);
    expect(jump).toBe(Number.POSITIVE_INFINITY);
  });
});

describe('a clipped sine (J08)', () => {
  const { given } = publishedCase('J08');

  it('has the published share of time at the limit, effort and travel', () => {
    const { command_amplitude: amplitude, limit } = given;
    // An oscillator without damping makes the sine: after a step of u it swings as u·(1 − cos t); less u, as −cos t.
    const loop: SmallLoop = {
      inputs: 'u: {}',
      plant: `v: { integral: (1 1/s^2)*(u - x), unit: 1/s }\nx: { integral: v }\ny: { value: x - u, range: [${-limit}, ${limit}] }`,
      scenarios: `run: { lasts: ${8 * Math.PI} s, inputs: { u: { step: ${amplitude}, at: 0 s } } }`,
      requirements: [
        `{ name: A, in: run, measure: saturated_share, of: y, until: ${4 * Math.PI} s, at_most: 1 }`,
        `{ name: B, in: run, measure: rms_effort, of: y, until: ${4 * Math.PI} s, at_most: 1 }`,
        `{ name: C, in: run, measure: travel, of: y, until: ${4 * Math.PI} s, at_most: 1 }`,
        `{ name: D, in: run, measure: duty, of: y, over: ${2 * Math.PI} s, until: ${4 * Math.PI} s, at_most: 1 }`,
      ],
    };
    const [share, rms, travel, mean] = smallValues(loop, 4);
    expectPublished('J08', 'share_of_time_at_limit', share);
    expectPublished('J08', 'root_mean_square', rms);
    expectPublished('J08', 'travel_per_period', travel / 2);
    expectPublished('J08', 'mean_absolute', mean * limit);
  });
});
