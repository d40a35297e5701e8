import { describe, expect, it } from 'vitest';
import { expectPublished, publishedCase } from '../published.js';
import { measured } from './measured.js';

/** A mass that a constant force pushes for 3 s, and what is measured of its way. */
function pushed(parameters: string, plant: string, requirement: string): number {
  const results = measured(
    `
parameters: ${parameters}
inputs: { push: { unit: N } }
plant:
${plant}
scenarios: { go: { lasts: 3 s, inputs: { push: { step: 2 N, at: 0 s } } } }
requirements: [{ name: figure, in: go, ${requirement} }]
`,
    { halvings: 3 },
  );
  return results.figure;
}

describe('a parameter at its limiting value degenerates as physics says', () => {
  const cart = (friction: string): number =>
    pushed(
      `{ drag: { nominal: ${friction} N*s/m, from: 0 N*s/m, to: 5 N*s/m } }`,
      '  speed: { integral: (push - drag*speed)/(4 kg), unit: m/s }\n  place: { integral: speed, unit: m }',
      'measure: largest_value, of: place, at_most: 90 m',
    );

  it('without friction a double integrator: half the acceleration times the square of the time', () => {
    expect(cart('0')).toBeCloseTo(0.5 * (2 / 4) * 9, 12);
    // And the way there is continuous: with a little friction almost as far.
    expect(cart('1e-6')).toBeCloseTo(cart('0'), 5);
  });

  it('without lag the lag vanishes', () => {
    const lagged = (lag: string, more: string): number =>
      pushed(
        `{ slow: { nominal: ${lag}, from: 0 s, to: 1 s } }`,
        `  force: { lag: slow, of: push, unit: N }\n  speed: { integral: (force${more})/(4 kg), unit: m/s }`,
        'measure: largest_value, of: speed, at_most: 90 m/s',
      );
    expect(lagged('0 s', '')).toBeCloseTo(1.5, 8);
    expect(lagged('0.5 s', '')).toBeCloseTo(1.5 - 0.25 * (1 - Math.exp(-6)), 9);
    // The same beside something nonlinear, where no exponential moves the plant.
    expect(lagged('0 s', ' - (1 N)*tanh(speed/(1 m/s))')).toBeCloseTo(
      lagged('1 us', ' - (1 N)*tanh(speed/(1 m/s))'),
      5,
    );
  });

  it('an inertia that is an expression of masses and lengths gives the handbook’s value (J01)', () => {
    const { given, expect: expected } = publishedCase('J01');
    const [name] = Object.keys(expected);
    const rod = given.rod_mass_kg ?? given.mass_rod_kg;
    const ends: number[] = given.end_masses_kg ?? [given.end_mass_kg, given.end_mass_kg];
    const length = given.rod_length_m ?? given.length_m;
    // A torque of 2 N*m for 3 s gives a speed of 6/J: the inertia as the loop has it.
    const speed = pushed(
      `{ rod: { nominal: ${rod} kg, spread: 10 % }, one: { nominal: ${ends[0]} kg, spread: 10 % }, other: { nominal: ${ends[1]} kg, spread: 10 % }, whole: { nominal: ${length} m, spread: 10 % } }`,
      '  turn: { integral: (push*(1 m))/(rod*whole^2/12 + (one + other)*(whole/2)^2), unit: rad/s }',
      'measure: largest_value, of: turn, at_most: 900 rad/s',
    );
    expectPublished('J01', name, 6 / speed);
  });
});
