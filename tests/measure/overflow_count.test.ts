import { describe, expect, it } from 'vitest';
import { measured, resultsOf } from '../loop/measured.js';

/** A Q1.15 controller that doubles what it reads: from 0.5 on the result leaves the format. */
const spec = (overflow: string): string => `
inputs: { way: {} }
plant: { y: { value: way } }
sensors: { gauge: { of: y } }
controllers:
  axis:
    every: 10 ms
    arithmetic: { format: Q1.15, rounding: nearest, overflow: ${overflow} }
    signals: { twice: { value: gauge + gauge, range: [-0.75, 0.75] } }
scenarios: { climb: { lasts: 1 s, inputs: { way: { staircase: { rise: 0.1, every: 0.1 s, steps: 8 }, at: 0 s } } } }
requirements:
  - { name: overflows, measure: overflow_count, of: axis, in: climb, at_most: 0, scale: 1 }
  - { name: hits, measure: limit_hit_count, of: axis, in: climb, at_most: 0, scale: 1 }
`;

describe('counts of a fixed-point controller', () => {
  it('are the instants at which the sum leaves its format, and those at the end of its range', () => {
    // It reads 0.1 for ten instants, then 0.2 …; 2·0.5 is just too large for Q1.15, so from 0.4 s on all 60 instants overflow.
    const { overflows, hits } = measured(spec('saturate'));
    expect(overflows).toBe(60);
    // At the range's end from 2·0.4 = 0.8 on: from 0.3 s.
    expect(hits).toBe(70);
  });

  it('refuse a controller that is not there', () => {
    expect(() => resultsOf(spec('saturate').replace('of: axis', 'of: axes'))).toThrow(
      /unknown controller `axes`.*`axis`/,
    );
  });
});
