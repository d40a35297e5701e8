import { describe, expect, it } from 'vitest';
import { fencesOf } from '../../src/plots/fences.js';
import { measureSmall, numberOf, smallSpecOf } from '../small_loop.js';

const loop = (holds: string, least = 0) => ({
  inputs: 'u: { unit: m }',
  plant: 'y: { lag: 1 s, of: u, unit: m }',
  scenarios: 'run: { lasts: 10 s, inputs: { u: { step: 1 m, at: 1 s } } }',
  requirements: [`{ name: R, in: run, measure: over_time, at_least: ${least}, holds: ${holds} }`],
});

/** The lines of a statement over signal y. */
function lines(holds: string, least?: number) {
  const [requirement] = smallSpecOf(loop(holds, least)).requirements;
  const context = { signal: 'y', step: undefined, targetAt: () => undefined, from: 1, until: 10 };
  return fencesOf(requirement, context).map(({ from, to, forbidden }) => [
    from.time,
    to.time,
    from.value,
    forbidden,
  ]);
}

describe('fences of statements over time', () => {
  it('are the levels that a signal keeps throughout a window', () => {
    expect(lines('{ throughout: y < 1200 mm, from: 2 s, scale: 1 m }')).toEqual([[2, 10, 1.2, 'above']]);
    expect(lines('{ throughout: 0.5 m < y, from: 3 s, to: 5 s, scale: 1 m }')).toEqual([
      [3, 5, 0.5, 'below'],
    ]);
    expect(lines('{ all_of: [{ throughout: y < 2 m }, { throughout: y > -1 m }], scale: 1 m }')).toEqual([
      [0, 10, 2, 'above'],
      [0, 10, -1, 'below'],
    ]);
  });

  it('are none where there is no one level', () => {
    for (const holds of [
      '{ throughout: y < u, scale: 1 m }',
      '{ throughout: u < 2 m, scale: 1 m }',
      '{ at_some_time: y > 0.5 m, scale: 1 m }',
      '{ one_of: [{ throughout: y < 2 m }, { throughout: y > 3 m }], scale: 1 m }',
    ])
      expect(lines(holds)).toEqual([]);
  });

  it('lie where the margin is the limit: a signal that just touches one has just that margin', () => {
    // y rises to 1 − e^{−4} by 5 s.
    const highest = 1 - Math.exp(-4);
    const [[, , level]] = lines('{ throughout: y < 1.5 m, to: 5 s, scale: 200 mm }', 0.7);
    expect(level).toBeCloseTo(1.5 - 0.7 * 0.2, 12);
    const [margin] = measureSmall(loop('{ throughout: y < 1.5 m, to: 5 s, scale: 200 mm }')).map(numberOf);
    expect(1.5 - margin * 0.2).toBeCloseTo(highest, 6);
  });
});
