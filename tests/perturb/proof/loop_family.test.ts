import fc from 'fast-check';
import { describe, expect, it } from 'vitest';
import { openedLoop } from '../../../src/linear/opened_loop.js';
import { scheduleOf } from '../../../src/loop/schedule.js';
import { LoopPoint } from '../../../src/measure/loop_point.js';
import { ParameterSpace } from '../../../src/perturb/parameter_space.js';
import type { Interval } from '../../../src/perturb/proof/interval.js';
import { LoopFamily } from '../../../src/perturb/proof/loop_family.js';
import { type Slope, SlopeField } from '../../../src/perturb/proof/slope.js';
import { openedLoopOver } from '../../../src/perturb/proof/slope_cycle.js';
import { SlopeEvaluation, Unprovable } from '../../../src/perturb/proof/slope_evaluation.js';
import type { Spec } from '../../../src/spec/spec.js';
import { motorWith } from '../../verdict/motor.js';

function pointOf(spec: Spec): LoopPoint {
  return new LoopPoint(spec, new Map(), spec.requirements[1]);
}

const share = fc.double({ min: 0, max: 1, noNaN: true });

describe('the loop of all plants of a box', () => {
  // The one plant's loop is held against published margins in the tests of the linear analysis.
  it('holds the opened loop of every single plant', () => {
    const spec = motorWith();
    const { linearisation } = pointOf(spec);
    const nominal = spec.parameters.map((parameter) => parameter.nominal);
    const schedule = scheduleOf(linearisation.loop, nominal);
    fc.assert(
      fc.property(
        share,
        share,
        fc.double({ min: 1e-6, max: 0.2, noNaN: true }),
        share,
        share,
        (a, b, size, s, t) => {
          const box = spec.parameters.map(({ low, high }, i): Interval => {
            const from = low + [a, b][i] * (high - low) * (1 - size);
            return [from, from + size * (high - low)];
          });
          const field = new SlopeField(box);
          const evaluation = new SlopeEvaluation(field, (leaf, index) =>
            leaf === 'parameter' ? field.variable(index) : field.constant(0),
          );
          const over = openedLoopOver(linearisation, schedule, evaluation)!;
          const parameters = box.map(([low, high], i) => Math.min(high, low + [s, t][i] * (high - low)));
          const one = openedLoop(linearisation, schedule, { parameter: parameters });
          const holds = (slope: Slope, value: number): void => {
            const off = 1e-12 * (1 + Math.abs(value));
            expect(slope.range[0]).toBeLessThanOrEqual(value + off);
            expect(slope.range[1]).toBeGreaterThanOrEqual(value - off);
          };
          const n = over.a.length;
          expect(one.a.rows).toBe(n);
          over.a.forEach((row, i) => {
            row.forEach((entry, j) => {
              holds(entry, one.a.data[i * n + j]);
            });
            holds(over.b[i], one.b.data[i]);
            holds(over.c[i], one.c.data[i]);
          });
          holds(over.d, one.d.data[0]);
        },
      ),
      { seed: 91, numRuns: 60 },
    );
  });

  it('is as narrow as its box', () => {
    const spec = motorWith();
    const family = new LoopFamily(pointOf(spec), new ParameterSpace(spec.parameters));
    const width = (size: number): number => {
      const box = family.box.map(([low, high]): Interval => [low, low + size * (high - low)]);
      const { denominator, numerator } = family.polynomials(new SlopeField(box));
      return Math.max(...[...denominator, ...numerator].map(({ range }) => range[1] - range[0]));
    };
    expect(width(1e-4)).toBeLessThan(1.5e-4 * 10 * width(0.1));
    expect(width(1e-9)).toBeLessThan(1e-8);
  });

  it('follows derived parameters', () => {
    const spec = motorWith([
      '  gain: { nominal: 2 rad/(V*s), from: 1.2 rad/(V*s), to: 3 rad/(V*s) }',
      '  gain: { value: lag*(40 rad/(V*s^2)), unit: rad/(V*s) }',
    ]);
    const family = new LoopFamily(pointOf(spec), new ParameterSpace(spec.parameters));
    expect(family.box).toHaveLength(1);
    const { numerator } = family.polynomials(new SlopeField(family.box));
    expect(numerator.some(({ slopes }) => slopes[0][1] !== 0)).toBe(true);
  });

  it('says why there is no proof: timing that moves, a point that may move', () => {
    const timing = motorWith(
      ['    every: 2 ms', '    every: (2 ms) + late'],
      ['parameters:', 'parameters:\n  late: { nominal: 0 s, from: 0 s, to: 1 ms }'],
    );
    expect(() => new LoopFamily(pointOf(timing), new ParameterSpace(timing.parameters))).toThrow(Unprovable);
    const curved = motorWith([
      'of: drive, gain: gain',
      'of: drive + (0.1 V)*exp(speed*(1 s/rad)), gain: gain',
    ]);
    const family = new LoopFamily(pointOf(curved), new ParameterSpace(curved.parameters));
    expect(() => family.polynomials(new SlopeField(family.box))).toThrow('may move with a parameter');
  });
});
