import { describe, it } from 'vitest';
import { expectPublished, publishedCase, publishedGroup } from '../published.js';
import { measureSmall, numberOf, type SmallLoop } from '../small_loop.js';

/**
 * Group A: step and frequency responses of second- and first-order systems, closed forms at 40 digits (Ogata 2010; Franklin,
 * Powell and Emami-Naeini 2010; Nise 2011; Åström and Murray 2008). The traces are taken at steps halved six times, where the
 * error of a piece of degree five, (ωh)⁶/46080, is below rounding.
 */
const halvings = 4;

function stepResponse(plant: string, lasts: number): SmallLoop {
  const window = 'in: step';
  const measures = {
    overshoot: `measure: overshoot, of: y, to: u, ${window}, at_most: 1`,
    peak_time: `measure: time_of_largest_value, of: y, ${window}, at_most: 1 s`,
    rise_time_10_90: `measure: rise_time, of: y, to: u, ${window}, at_most: 1 s`,
    settling_time_2_percent: `measure: settling_time, of: y, to: u, band: 2 %, ${window}, at_most: 1 s`,
    settling_time_5_percent: `measure: settling_time, of: y, to: u, band: 5 %, ${window}, at_most: 1 s`,
    total_variation: `measure: travel, of: y, ${window}, at_most: 1`,
    integral_of_squared_error: `measure: squared_deviation_integral, of: y, to: u, ${window}, at_most: 1 s`,
    half_value_time: `measure: delay_time, of: y, to: u, ${window}, at_most: 1 s`,
  };
  return {
    inputs: 'u: {}',
    plant,
    scenarios: `step: { lasts: ${lasts} s, inputs: { u: { step: 1, at: 0 s } } }`,
    requirements: Object.entries(measures).map(([name, text]) => `{ name: ${name}, ${text} }`),
  };
}

/** Measures by requirement name; the overshoot in per cent as the cases give it. */
function measured(loop: SmallLoop): Record<string, number> {
  const results = measureSmall(loop, { halvings });
  const names = loop.requirements.map((text) => /name: (\w+)/.exec(text)![1]);
  return Object.fromEntries(
    names.map((name, i) => [name, name === 'overshoot' ? 100 * numberOf(results[i]) : numberOf(results[i])]),
  );
}

describe('step responses of the standard second-order system', () => {
  const cases = publishedGroup('A').filter(
    ({ given }) => 'damping_ratio' in given && given.damping_ratio < 1,
  );
  it.each(cases.map((entry) => [entry.id, entry] as const))('%s', (id, { given, expect: figures }) => {
    const { natural_frequency_rad_per_s: w, damping_ratio: z } = given;
    const values = measured(
      stepResponse(
        `v: { integral: (${w * w} 1/s^2)*(u - y) - (${2 * z * w} 1/s)*v, unit: 1/s }\ny: { integral: v }`,
        Math.max(60, 36 / (z * w)),
      ),
    );
    for (const name of Object.keys(values)) if (name in figures) expectPublished(id, name, values[name]);
    expectPublished(id, 'normalised_rise_time_10_90', values.rise_time_10_90 * w);
  });
});

describe('step responses without oscillation', () => {
  it('A10: the first-order lag', () => {
    const tau = publishedCase('A10').given.time_constant_s;
    const values = measured(stepResponse(`y: { lag: ${tau} s, of: u }`, 10));
    for (const name of [
      'overshoot',
      'rise_time_10_90',
      'settling_time_2_percent',
      'settling_time_5_percent',
      'half_value_time',
    ]) {
      expectPublished('A10', name, values[name]);
    }
  });

  it('A11: the critically damped second-order system, a double pole', () => {
    const values = measured(
      stepResponse('v: { integral: (1 1/s^2)*(u - y) - (2 1/s)*v, unit: 1/s }\ny: { integral: v }', 60),
    );
    for (const name of [
      'overshoot',
      'rise_time_10_90',
      'settling_time_2_percent',
      'settling_time_5_percent',
    ]) {
      expectPublished('A11', name, values[name]);
    }
  });
});
