import { describe, expect, it } from 'vitest';
import { continuousImage, trapezoidalEquivalent } from '../../src/linear/bilinear.js';
import { holdEquivalent } from '../../src/linear/hold_equivalent.js';
import { fromRows, zeros } from '../../src/linear/matrix.js';
import { prepareResponse, responseAt } from '../../src/linear/response.js';
import type { StateEquations } from '../../src/linear/state_equations.js';
import { transmissionZeros } from '../../src/linear/transmission_zeros.js';
import { expectPublished, publishedCase } from '../published.js';
import { loopOf, ratioOf } from './loops.js';

function publishedSystem(id: string): StateEquations {
  const { state_matrix: a, input_matrix: b, output_matrix: c } = publishedCase(id).given;
  return {
    a: fromRows(a),
    b: fromRows(b),
    c: fromRows(c),
    d: zeros(c.length, b[0].length),
    period: undefined,
  };
}

// Each published case names its own source: reference/published/README.md.
describe('sampled equivalents behind a zero-order hold', () => {
  for (const id of ['B01', 'B02', 'B03', 'B04', 'B05']) {
    it(`${id}: ${publishedCase(id).title}, with delays of whole periods and parts of them`, () => {
      const { sampling_period_s: period, input_delays_s: delays } = publishedCase(id).given;
      ['no_delay', 'delayed', 'delayed_2'].forEach((suffix, k) => {
        const { numerator, denominator } = ratioOf(holdEquivalent(publishedSystem(id), period, delays[k]));
        expectPublished(id, `numerator_${suffix}`, [...numerator]);
        expectPublished(id, `denominator_${suffix}`, [...denominator]);
      });
    });
  }

  it(`B06: ${publishedCase('B06').title}`, () => {
    const { numerator, denominator } = ratioOf(holdEquivalent(publishedSystem('B06'), 1));
    expectPublished('B06', 'leading_numerator', numerator[1]);
    expectPublished('B06', 'trailing_numerator', numerator[2]);
    // The other pole is 1: what is left of the product of both is this one.
    expectPublished('B06', 'pole', denominator[2]);
  });

  it(`B07: ${publishedCase('B07').title}`, () => {
    const period = publishedCase('B07').given.sampling_period_s;
    for (const n of [2, 3, 4]) {
      const sampled = holdEquivalent(loopOf([1], [1, ...new Array(n).fill(0)]), period);
      const zeros = transmissionZeros(sampled, 1).map(({ real }) => real + 1);
      expectPublished(
        'B07',
        `zeros_n${n}`,
        zeros.sort((a, b) => a - b),
      );
      if (n < 4) continue;
      const { numerator } = ratioOf(sampled);
      const pattern = numerator
        .slice(1)
        .map((coefficient) => Math.round((coefficient / numerator[1]) * 1e6) / 1e6);
      expectPublished('B07', 'numerator_pattern_n4', pattern);
    }
  });

  it('has the response of the continuous system, held and delayed, far below the sampling frequency', () => {
    // Hold and delay together are e^{−jω(T/2 + delay)}·sinc(ωT/2); the images of a second-order lag are small there.
    const continuous = loopOf([9], [1, 0.6, 9]);
    const period = 1e-3;
    const delay = 2.4e-3;
    const frequency = 3.3;
    const sampled = responseAt(holdEquivalent(continuous, period, delay), frequency);
    const plain = responseAt(continuous, frequency);
    const lag = frequency * (period / 2 + delay);
    expect(sampled.real).toBeCloseTo(plain.real * Math.cos(lag) + plain.imaginary * Math.sin(lag), 5);
    expect(sampled.imaginary).toBeCloseTo(plain.imaginary * Math.cos(lag) - plain.real * Math.sin(lag), 5);
  });

  it('passes a feedthrough on, through its delay', () => {
    const gain = { ...loopOf([2], [1]), period: undefined };
    expect(ratioOf(holdEquivalent(gain, 0.1)).numerator).toEqual([2]);
    expect([...ratioOf(holdEquivalent(gain, 0.1, 0.2)).numerator]).toEqual([0, 0, 2]);
    expect([...ratioOf(holdEquivalent(gain, 0.1, 0.15)).numerator]).toEqual([0, 0, 2]);
  });

  it('takes a delay within rounding of a whole number of periods as that number', () => {
    const lag = loopOf([1], [1, 1]);
    expect(holdEquivalent(lag, 0.1, 0.3).a.rows).toBe(4);
    expect(holdEquivalent(lag, 0.1, 0.1 + 0.2).a.rows).toBe(4);
  });

  it('refuses a sampled system, a period of zero and a negative delay', () => {
    const lag = loopOf([1], [1, 1]);
    expect(() => holdEquivalent(holdEquivalent(lag, 0.1), 0.1)).toThrow(/sampled again/);
    expect(() => holdEquivalent(lag, 0)).toThrow(/period of 0 s/);
    expect(() => holdEquivalent(lag, 0.1, -1)).toThrow(/delay of -1 s/);
  });
});

describe('trapezoidal equivalents', () => {
  it(`B08: ${publishedCase('B08').title}`, () => {
    const { given } = publishedCase('B08');
    const period: number = given.sampling_period_s;
    const lag = loopOf([1], [given.lag_time_constant_s, 1]);
    const controller = loopOf([given.gain * given.integral_time_s, given.gain], [given.integral_time_s, 0]);
    const cases: [string, StateEquations][] = [
      ['lag', trapezoidalEquivalent(lag, period)],
      ['controller', trapezoidalEquivalent(controller, period)],
      ['pre_warped', trapezoidalEquivalent(lag, period, given.pre_warp_frequency_rad_per_s)],
    ];
    for (const [name, system] of cases) {
      const { numerator, denominator } = ratioOf(system);
      expectPublished('B08', `${name}_numerator`, [...numerator]);
      expectPublished('B08', `${name}_denominator`, [...denominator]);
    }
  });

  it('with a match frequency has exactly the continuous response there', () => {
    const lag = loopOf([3, 1], [0.02, 0.3, 1]);
    const sampled = prepareResponse(trapezoidalEquivalent(lag, 0.01, 200))(200);
    const continuous = responseAt(lag, 200);
    expect(sampled.real).toBeCloseTo(continuous.real, 13);
    expect(sampled.imaginary).toBeCloseTo(continuous.imaginary, 13);
  });

  it('are undone by the continuous image', () => {
    const system = loopOf([1, 2, 3], [1, 0.5, 4, 1]);
    const back = continuousImage(trapezoidalEquivalent(system, 0.2));
    const { numerator, denominator } = ratioOf(back);
    [0, 1, 2, 3].forEach((coefficient, i) => {
      expect(numerator[i]).toBeCloseTo(coefficient, 12);
    });
    [1, 0.5, 4, 1].forEach((coefficient, i) => {
      expect(denominator[i]).toBeCloseTo(coefficient, 12);
    });
  });

  it('refuse what is sampled already or matched beyond half the sampling frequency', () => {
    const lag = loopOf([1], [1, 1]);
    expect(() => trapezoidalEquivalent(loopOf([1], [1, 0.5], 1), 1)).toThrow(/sampled again/);
    expect(() => trapezoidalEquivalent(lag, 0.1, 40)).toThrow(/40 rad\/s is not between 0 and/);
    expect(() => continuousImage(lag)).toThrow(/no continuous image/);
  });
});
