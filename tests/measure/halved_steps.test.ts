import fc from 'fast-check';
import { describe, expect, it } from 'vitest';
import { measureSmall, type SmallLoop } from '../small_loop.js';

/**
 * Time measures are of the continuous signal between samples: halving the spacing of the trace changes none of them beyond
 * 1e-6 relative, for linear plants, whose movement is exact.
 */

const measures = [
  'measure: overshoot, of: y, to: u, at_most: 1',
  'measure: rise_time, of: y, to: u, at_most: 1 s',
  'measure: delay_time, of: y, to: u, at_most: 1 s',
  'measure: settling_time, of: y, to: u, band: 5 %, at_most: 1 s',
  'measure: settling_time, of: y, to: u, band: 2 %, at_most: 1 s',
  'measure: absolute_deviation_integral, of: y, to: u, at_most: 1 s',
  'measure: late_deviation_integral, of: y, to: u, at_most: 1 s^2',
  'measure: travel, of: y, at_most: 1',
  'measure: recovery_time, of: y, to: u, band: 0.013, at_most: 1 s',
];

function within(share: number, loop: SmallLoop): void {
  const coarse = measureSmall(loop);
  const fine = measureSmall(loop, { halvings: 1 });
  coarse.forEach((result, i) => {
    const other = fine[i];
    expect(result.kind, loop.requirements[i]).toBe(other.kind);
    if (result.kind !== 'value' || other.kind !== 'value') return;
    const change = Math.abs(result.value - other.value) / Math.max(Math.abs(other.value), 1e-2);
    expect(change, `${loop.requirements[i]}: ${result.value} and ${other.value}`).toBeLessThan(share);
  });
}

/** Only a response that goes past its end has a largest value at a time of its own. */
const whenLargest = '{ name: P, in: run, measure: time_of_largest_value, of: y, at_most: 1 s }';

const requirements = measures.map((text, i) => `{ name: R${i}, in: run, ${text} }`);
const scenarios = 'run: { lasts: 12 s, inputs: { u: { step: 1, at: 0.5 s } } }';

describe('halving the spacing of the trace', () => {
  it('changes nothing for oscillators with a fast and a slow lag', () => {
    const rate = fc.double({ min: 0.5, max: 8, noNaN: true });
    const damping = fc.double({ min: 0.15, max: 1.5, noNaN: true });
    const lag = fc.double({ min: 0.001, max: 1, noNaN: true });
    fc.assert(
      fc.property(rate, damping, lag, (w, z, tau) => {
        const plant = [
          `a: { lag: ${tau} s, of: u }`,
          `v: { integral: (${w * w} 1/s^2)*(a - y) - (${2 * z * w} 1/s)*v, unit: 1/s }`,
          'y: { integral: v }',
        ].join('\n');
        const all = z < 0.6 && w * tau < 0.2 ? [...requirements, whenLargest] : requirements;
        within(1e-6, { inputs: 'u: {}', plant, scenarios, requirements: all });
      }),
      { numRuns: 8 },
    );
  });

  it('changes nothing for sampled loops, their period long or short against the plant', () => {
    const period = fc.double({ min: 0.01, max: 0.3, noNaN: true });
    const gain = fc.double({ min: 0.2, max: 2, noNaN: true });
    fc.assert(
      fc.property(period, gain, fc.double({ min: 0, max: 0.2, noNaN: true }), (every, k, delay) => {
        within(1e-6, {
          inputs: 'u: {}',
          plant:
            'force: { lag: 0.02 s, of: drive }\nspeed: { lag: 0.7 s, of: force, unit: 1/s, gain: 1 1/s }\ny: { integral: speed }',
          sensors: 'seen: { of: y, filter: 5 ms }',
          controllers: `law:\n  every: ${every.toFixed(4)} s\n  delay: ${delay.toFixed(4)} s\n  signals:\n    command: { value: ${k}*(u - seen) }`,
          actuators: 'drive: { of: command }',
          scenarios,
          requirements,
        });
      }),
      { numRuns: 8 },
    );
  });

  it('changes nothing where a lag is a thousand times as fast as the sampling', () => {
    within(1e-6, {
      inputs: 'u: {}',
      plant: 'force: { lag: 20 us, of: drive }\ny: { lag: 0.7 s, of: force }\nz: { value: force + y }',
      sensors: 'seen: { of: y }',
      controllers: 'law:\n  every: 20 ms\n  signals:\n    command: { value: 4*(u - seen) }',
      actuators: 'drive: { of: command }',
      scenarios,
      requirements: [
        ...requirements,
        '{ name: S1, in: run, measure: largest_value, of: force, at_most: 1 }',
        '{ name: S2, in: run, measure: travel, of: force, at_most: 1 }',
        '{ name: S3, in: run, measure: largest_value, of: z, at_most: 1 }',
      ],
    });
  });
});
