import { describe, it } from 'vitest';
import { expectPublished, publishedCase } from '../published.js';
import { smallValues } from '../small_loop.js';
import { canonicalPlant, sumOf } from './canonical_plant.js';

/** Overshoot in per cent and time of the peak of the unit step of a closed loop N/(D + N). */
function stepOf(numerator: number[], denominator: number[], unit: number): [number, number] {
  const [share, time] = smallValues(
    {
      inputs: 'u: {}',
      plant: canonicalPlant(numerator, sumOf(denominator, numerator), unit),
      scenarios: `run: { lasts: ${30 * unit} s, inputs: { u: { step: 1, at: 0 s } } }`,
      requirements: [
        '{ name: A, in: run, measure: overshoot, of: y, to: u, at_most: 1 }',
        '{ name: B, in: run, measure: time_of_largest_value, of: y, at_most: 1 s }',
      ],
    },
    4,
  );
  return [100 * share, time];
}

describe('three-term control of 1/(s(s+1)(s+5)) (Ogata 2010; Ziegler and Nichols 1942)', () => {
  it.each(['C07', 'C08', 'C09'])('%s', (id) => {
    const {
      gain: k,
      integral_time_s: ti,
      derivative_time_s: td,
      plant_denominator,
    } = publishedCase(id).given;
    // k(1 + 1/(Ti·s) + Td·s) in series with the plant, one more integrator.
    const [overshoot, time] = stepOf([k * td, k, k / ti], [...plant_denominator, 0], 1);
    expectPublished(id, 'overshoot', overshoot);
    expectPublished(id, 'peak_time', time);
  });
});

describe('modulus and symmetrical optimum (Kessler 1955, 1958)', () => {
  it.each(['E15', 'E16'])('%s', (id) => {
    const { numerator, denominator, small_time_constant_s: unit } = publishedCase(id).given;
    const [overshoot, time] = stepOf(numerator, denominator, unit);
    expectPublished(id, 'overshoot', overshoot);
    expectPublished(id, 'peak_time', time);
  });
});
