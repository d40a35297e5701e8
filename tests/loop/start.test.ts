import { describe, expect, it } from 'vitest';
import { measured, resultsOf } from './measured.js';

const spec = (start: string, pull = '0'): string => `
inputs: { kick: { unit: m/s } }
plant:
  speed: { integral: (${pull} - speed + 0*kick)/(2 s), start: 1 m/s, unit: m/s }
  place: { integral: speed, unit: m }
scenarios: { go: { start: ${start}, lasts: 20 s, inputs: { kick: { step: 1 m/s, at: 0 s } } } }
requirements:
  - { name: fast, measure: largest_value, of: speed, in: go, at_most: 9 m/s }
  - { name: far, measure: largest_value, of: place, in: go, at_most: 90 m }
`;

describe('where a scenario starts', () => {
  it('at rest, at zero, or at given states', () => {
    expect(measured(spec('rest')).fast).toBe(0);
    expect(measured(spec('zero')).fast).toBe(0);
    const given = measured(spec('{ speed: 3 m/s }'), { halvings: 2 });
    expect(given.fast).toBe(3);
    // What is left of 3 m/s with a time constant of 2 s brings it 6 m far.
    expect(given.far).toBeCloseTo(6 * (1 - Math.exp(-10)), 9);
  });

  it('needs no rest where states are given', () => {
    const falling = spec('{ place: 5 m }').replace('(0 - speed + 0*kick)/(2 s)', '-(1 m/s^2) + 0*kick/(1 s)');
    expect(
      resultsOf(spec('rest').replace('(0 - speed + 0*kick)/(2 s)', '-(1 m/s^2) + 0*kick/(1 s)')).far.kind,
    ).toBe('unformed');
    const { fast, far } = measured(falling, { halvings: 2 });
    expect(fast).toBe(1);
    // From 5 m at 1 m/s against 1 m/s²: half a metre higher.
    expect(far).toBeCloseTo(5.5, 9);
  });

  it('refuses what is no state, with the states that there are', () => {
    const wrong = spec('{ kick: 3 m/s }');
    expect(() => measured(wrong)).toThrow(
      "'kick' is no state, and so cannot start at a value; the states are 'speed', 'place'",
    );
    expect(() => measured(spec('{ sped: 3 m/s }'))).toThrow(/unknown signal `sped`.*`speed`/);
  });
});
