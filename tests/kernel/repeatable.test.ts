import { describe, expect, it } from 'vitest';
import { PlantEvaluator } from '../../src/measure/evaluate_plant.js';
import type { MeasureResult } from '../../src/measure/measure.js';
import { measureSmall, type SmallLoop, smallSpecOf } from '../small_loop.js';

const noisy: SmallLoop = {
  parameters: 'tau: { nominal: 0.5 s, spread: 40 % }\nother: { nominal: 1, spread: 10 % }',
  inputs: 'u: {}',
  plant: 'y: { lag: tau, of: drive, gain: other }\nstill: { value: 0*drive + u }',
  sensors: 'seen: { of: y, noise: 0.01, quantum: 0.001 }\ndeaf: { of: still, noise: 0.05 }',
  controllers:
    'law:\n  every: 10 ms\n  delay: 4 ms\n  signals:\n    noise_alone: { value: deaf }\n    command: { value: 2*(u - seen) + 0*noise_alone }',
  actuators: 'drive: { of: command, range: [-3, 3] }',
  scenarios: 'run: { lasts: 2 s, inputs: { u: { step: 1, at: 0.5 s } } }',
  requirements: [
    '{ name: A, in: run, measure: travel, of: noise_alone, at_most: 1 }',
    '{ name: B, in: run, measure: activity, of: deaf, from: 0.6 s, at_most: 1 }',
    '{ name: C, in: run, measure: travel, of: drive, at_most: 1 }',
    '{ name: D, in: run, measure: overshoot, of: y, to: u, at_most: 1 }',
    '{ name: E, measure: phase_margin, at: drive, at_least: 30 deg }',
  ],
};

function evaluated(loop: SmallLoop, plant: number[]): MeasureResult[] {
  return new PlantEvaluator(smallSpecOf(loop), new Map()).evaluate(Float64Array.from(plant), 0);
}

describe('noise', () => {
  it('is the same for every plant: what it alone drives does not depend on the plant', () => {
    const [a, b] = [evaluated(noisy, [0.3, 1.1]), evaluated(noisy, [0.7, 0.9])];
    expect(a.slice(0, 2)).toEqual(b.slice(0, 2));
    expect(a[2]).not.toEqual(b[2]);
  });

  it('has the standard deviation that is stated', () => {
    // 140 draws: the sample deviation is within 20 % of the true one with more than 99.9 % confidence, and the seed is fixed.
    const [, activity] = evaluated(noisy, [0.5, 1]);
    expect(activity.kind === 'value' && activity.value / 0.05).toBeGreaterThan(0.8);
    expect(activity.kind === 'value' && activity.value / 0.05).toBeLessThan(1.2);
  });

  it('changes with the seed, and only with it', () => {
    const seeded = (seed: number): MeasureResult[] => measureSmall({ ...noisy, seed });
    expect(seeded(3)).toEqual(seeded(3));
    expect(seeded(3)[0]).not.toEqual(seeded(4)[0]);
    expect(seeded(3)[4]).toEqual(seeded(4)[4]);
  });
});

describe('results', () => {
  it('do not depend on which plants came before', () => {
    const evaluator = new PlantEvaluator(smallSpecOf(noisy), new Map());
    const first = evaluator.evaluate(Float64Array.of(0.5, 1), 0);
    for (const tau of [0.3, 0.69, 0.41]) evaluator.evaluate(Float64Array.of(tau, 1.05), 1);
    expect(evaluator.evaluate(Float64Array.of(0.5, 1), 0)).toEqual(first);
  });

  it('do not depend on the order of blocks in the spec', () => {
    const reversed = (text: string): string => {
      const entries = text.split(/\n(?=\S)/);
      return entries.reverse().join('\n');
    };
    const loop: SmallLoop = {
      inputs: 'u: {}\nd: {}',
      plant:
        'a: { lag: 0.1 s, of: drive }\nv: { integral: (4 1/s^2)*(a - y) - (1 1/s)*v + (1 1/s^2)*d, unit: 1/s }\ny: { integral: v }',
      sensors: 'seen: { of: y }\nfast: { of: a, filter: 2 ms }',
      controllers:
        'outer:\n  every: 20 ms\n  signals:\n    wanted: { value: 2*(u - seen) }\ninner:\n  every: 5 ms\n  delay: 1 ms\n  signals:\n    command: { value: wanted - 0.3*fast }',
      actuators: 'drive: { of: command }',
      scenarios:
        'run: { lasts: 3 s, inputs: { u: { step: 1, at: 0.5 s }, d: { pulse: 1, at: 1 s, for: 1 s } } }',
      requirements: [
        '{ name: A, in: run, measure: travel, of: y, at_most: 1 }',
        '{ name: B, in: run, measure: time_of_largest_value, of: y, at_most: 1 s }',
        '{ name: C, measure: phase_margin, at: wanted, at_least: 30 deg }',
        '{ name: D, measure: modulus_margin, at: drive, at_least: 0.5 }',
      ],
    };
    const turned: SmallLoop = {
      ...loop,
      inputs: reversed(loop.inputs!),
      plant: reversed(loop.plant!),
      sensors: reversed(loop.sensors!),
      controllers: reversed(loop.controllers!),
      requirements: [...loop.requirements].reverse(),
    };
    const [one, other] = [measureSmall(loop), measureSmall(turned).reverse()];
    one.forEach((result, i) => {
      const same = other[i];
      expect(result.kind).toBe('value');
      if (result.kind !== 'value' || same.kind !== 'value') return;
      // States in another order are summed in another order: rounding, no more.
      expect(Math.abs(result.value - same.value)).toBeLessThan(1e-9);
    });
  });
});
