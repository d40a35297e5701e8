import { describe, expect, it } from 'vitest';
import { PlantEvaluator } from '../../src/measure/evaluate_plant.js';
import { measureSmall, type SmallLoop, smallSpecOf, smallValues } from '../small_loop.js';

/** A sampled integrator under proportional control, x = k·T: the noise of its sensor moves position and drive. */
function integrator(x: number, unit: string, delay: string): SmallLoop {
  const scale = unit === 'mm' ? 1e-3 : 1;
  return {
    inputs: 'u: { unit: m }',
    plant: 'y: { integral: drive, unit: m }',
    sensors: `seen: { of: y, unit: ${unit}, noise: 1 mm }`,
    controllers: `law:\n  every: 10 ms\n  delay: ${delay}\n  signals:\n    command: { value: (${(x / 0.01) * scale} m/s/${unit})*(u - seen), unit: m/s }`,
    actuators: 'drive: { of: command, unit: m/s }',
    scenarios: 'run: { lasts: 200 s }',
    requirements: [
      '{ name: A, measure: noise_gain, at: seen, of: drive, at_most: 1 1/s }',
      '{ name: B, measure: activity, of: drive, in: run, from: 1 s, at_most: 1 m/s }',
    ],
  };
}

describe('the noise gain from a sensor to an actuator', () => {
  it.each(['m', 'mm'])('is that of the closed form, the sensor in %s', (unit) => {
    // y(k+1) = (1 − x)·y − x·n, u = −(x/T)(y + n): variance of u over that of n is (x/T)²·2/(2 − x).
    for (const x of [0.1, 0.7, 1.5]) {
      const [gain] = smallValues({
        ...integrator(x, unit, '0 s'),
        requirements: integrator(x, unit, '0 s').requirements.slice(0, 1),
      });
      expect(gain / ((x / 0.01) * Math.sqrt(2 / (2 - x)))).toBeCloseTo(1, 9);
    }
  });

  it('is what a long run with that noise shows', () => {
    const [gain, activity] = smallValues(integrator(0.4, 'mm', '7 ms'));
    // 20,000 samples: within a few per cent.
    expect(activity / (gain * 1e-3)).toBeGreaterThan(0.97);
    expect(activity / (gain * 1e-3)).toBeLessThan(1.03);
  });

  it('is what a long run shows for two rates', () => {
    const loop: SmallLoop = {
      inputs: 'u: {}',
      plant: 'speed: { lag: 50 ms, of: drive, unit: 1/s, gain: 1 1/s }\ny: { integral: speed }',
      sensors: 'fast: { of: speed, unit: 1/s, noise: 0.01 1/s }\nslow: { of: y }',
      controllers:
        'outer:\n  every: 10 ms\n  signals:\n    wanted: { value: (8 1/s)*(u - slow), unit: 1/s }\ninner:\n  every: 2.5 ms\n  delay: 1 ms\n  signals:\n    command: { value: (2 s)*(wanted - fast) }',
      actuators: 'drive: { of: command }',
      scenarios: 'run: { lasts: 60 s }',
      requirements: [
        '{ name: A, measure: noise_gain, at: fast, of: drive, at_most: 1 s }',
        '{ name: B, measure: activity, of: drive, in: run, from: 1 s, at_most: 1 }',
      ],
    };
    const [gain, activity] = smallValues(loop);
    expect(activity / (gain * 0.01)).toBeGreaterThan(0.97);
    expect(activity / (gain * 0.01)).toBeLessThan(1.03);
  });

  it('is infinite for an unstable loop', () => {
    const loop = integrator(2.5, 'm', '0 s');
    const [result] = measureSmall({ ...loop, requirements: loop.requirements.slice(0, 1) });
    expect(result).toMatchObject({ kind: 'value', value: Number.POSITIVE_INFINITY });
  });

  it('goes from a sensor to an actuator, and nowhere else', () => {
    const loop = integrator(0.5, 'm', '0 s');
    const wrong = (text: string): (() => PlantEvaluator) => {
      const spec = smallSpecOf({ ...loop, requirements: [`{ name: A, measure: noise_gain, ${text} }`] });
      return () => new PlantEvaluator(spec, new Map());
    };
    expect(wrong('at: seen, of: y, at_most: 1')).toThrow(
      'noise goes from a sensor (`at: seen`) to an actuator (`of: y`)',
    );
    expect(wrong('at: drive, of: drive, at_most: 1')).toThrow(
      'expected one of the sensors seen and one of the actuators drive',
    );
  });
});
