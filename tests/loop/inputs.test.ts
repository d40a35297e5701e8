import { describe, expect, it } from 'vitest';
import { measured } from './measured.js';

/** A signal that copies its input, and another that is the input's integral, over 10 s. */
function driven(event: string, requirements: string[]): string {
  return `
parameters: { size: { nominal: 3 V, from: 1 V, to: 5 V } }
inputs: { drive: { unit: V, rest: 1 V }, other: { unit: V } }
plant:
  y: { value: drive + other*size/(1 V), unit: V }
  sum: { integral: y, unit: V*s }
  late: { dead_time: 1.25 s, of: y, unit: V }
  late_sum: { integral: late - y, unit: V*s }
scenarios: { run: { start: zero, lasts: 10 s, inputs: { drive: ${event} } } }
requirements:
${requirements.map((line, i) => `  - { name: r${i}, in: run, ${line} }`).join('\n')}
`;
}

const top = 'measure: largest_value, of: y, at_most: 900 V';
const low = 'measure: smallest_value, of: y, at_least: -900 V';
const sum = 'measure: largest_value, of: sum, at_most: 9000 V*s';
const lateTop = 'measure: largest_value, of: late, at_most: 900 V';
const values = (event: string, requirements: string[], halvings = 2): number[] =>
  Object.values(measured(driven(event, requirements), { halvings }));

describe('inputs over time', () => {
  it('step: the size from its time on', () => {
    // Measures look from the first event on.
    const [most, least, total] = values('{ step: size, at: 4 s }', [top, low, sum]);
    expect([most, least]).toEqual([4, 4]);
    expect(total).toBeCloseTo(10 + 6 * 3, 10);
  });

  it('pulse: the height for its length; several events add up', () => {
    const [most, total] = values('[{ pulse: 2 V, at: 1 s, for: 3 s }, { pulse: 5 V, at: 3 s, for: 2 s }]', [
      top,
      sum,
    ]);
    expect(most).toBe(8);
    expect(total).toBeCloseTo(10 + 6 + 10, 10);
  });

  it('ramp: a steady rise, exact, and the value reached stays', () => {
    const [most, total] = values('{ ramp: 2 V/s, at: 1 s, for: 3 s }', [top, sum]);
    expect(most).toBeCloseTo(7, 11);
    expect(total).toBeCloseTo(10 + 9 + 36, 9);
  });

  it('sine: amplitude, frequency and phase, for its length', () => {
    const [most, least, total] = values(
      '{ sine: { amplitude: 2 V, frequency: 0.5 Hz, phase: 90 deg }, at: 2 s, for: 5.5 s }',
      [top, low, sum],
    );
    expect(most).toBeCloseTo(3, 9);
    expect(least).toBeCloseTo(-1, 9);
    // ∫ 2·cos(πt) from 0 to 5.5 is (2/π)·sin(5.5π) = −2/π; the sum is largest at the end, where the base has brought 10.
    expect(total).toBeCloseTo(10 - 2 / Math.PI, 8);
  });

  it('sine: a period may stand for the frequency', () => {
    const [byPeriod, byFrequency] = [
      '{ sine: { amplitude: 2 V, frequency: 4 s }, at: 2 s }',
      '{ sine: { amplitude: 2 V, frequency: 0.25 Hz }, at: 2 s }',
    ].map((event) => values(event, [sum])[0]);
    expect(byPeriod).toBeCloseTo(byFrequency, 12);
  });

  it('chirp: its frequency goes steadily from the first to the last', () => {
    // φ = 2π(f₁ t + (f₂ − f₁) t²/(2T)): with 0.5 to 1.5 Hz in 4 s the angle at the end is 2π·4, and sin φ has 4 tops.
    const tops = values(
      '{ chirp: { amplitude: 2 V, first: 0.5 Hz, last: 1.5 Hz }, at: 1 s, for: 4 s }',
      [
        top,
        'measure: time_of_largest_value, of: y, at_most: 9 s',
        'measure: reversals_per_second, of: y, at_most: 90 1/s',
      ],
      5,
    );
    expect(tops[0]).toBeCloseTo(3, 6);
    expect(tops[2] * 10).toBeGreaterThanOrEqual(7);
  });

  it('square: changes sides at each half period and ends where it began', () => {
    const [most, least, total] = values(
      '{ square: { amplitude: 2 V, frequency: 0.5 Hz }, at: 1 s, for: 5 s }',
      [top, low, sum],
    );
    expect([most, least]).toEqual([3, -1]);
    // Five half periods of 1 s from 1 s on: three up, two down.
    expect(total).toBeCloseTo(10 + 2, 10);
  });

  it('staircase: equal steps, and the last stays', () => {
    const [most, total] = values('{ staircase: { rise: 2 V, every: 1 s, steps: 3 }, at: 1 s }', [top, sum]);
    expect(most).toBe(7);
    expect(total).toBeCloseTo(10 + 2 * 9 + 2 * 8 + 2 * 7, 10);
  });

  it('noise: the stated deviation, the same for every plant, gone after its length', () => {
    const event = '{ noise: { deviation: 0.5 V, every: 1 ms }, at: 0 s, for: 9 s }';
    const rms = 'measure: rms_deviation, of: y, to: other, at_most: 9 V';
    const [first, second] = [values(event, [rms])[0], values(event, [rms])[0]];
    expect(first).toBe(second);
    // rms² = 1 + 0.25·0.9 plus the sampling error of 9,000 draws (three of its deviations).
    expect(Math.abs(first ** 2 - (1 + 0.225))).toBeLessThan(
      3 * Math.sqrt((4 * 0.25) / 10_000 + 0.125 / 9_000),
    );
  });

  it('behind a dead time every shape comes as much later', () => {
    for (const event of [
      '{ step: 2 V, at: 1 s }',
      '{ ramp: 2 V/s, at: 1 s, for: 3 s }',
      '{ sine: { amplitude: 2 V, frequency: 0.5 Hz }, at: 2 s, for: 1.9 s }',
      '{ chirp: { amplitude: 2 V, first: 0.4 Hz, last: 0.5 Hz }, at: 1 s, for: 2 s }',
      '{ square: { amplitude: 2 V, frequency: 0.5 Hz }, at: 1 s, for: 2 s }',
    ]) {
      const time = (of: string): string => `measure: time_of_largest_value, of: ${of}, at_most: 90 s`;
      const [most, later, when, laterWhen] = values(event, [top, lateTop, time('y'), time('late')], 4);
      expect(later, event).toBeCloseTo(most, 6);
      expect(laterWhen - when, event).toBeCloseTo(1.25, 5);
    }
  });
});
