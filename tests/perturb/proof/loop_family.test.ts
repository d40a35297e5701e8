import fc from 'fast-check';
import { describe, expect, it } from 'vitest';
import { openedLoop } from '../../../src/linear/opened_loop.js';
import type { StateEquations } from '../../../src/linear/state_equations.js';
import { scheduleOf } from '../../../src/loop/schedule.js';
import { LoopPoint } from '../../../src/measure/loop_point.js';
import { ParameterSpace } from '../../../src/perturb/parameter_space.js';
import type { Interval } from '../../../src/perturb/proof/interval.js';
import { LoopFamily } from '../../../src/perturb/proof/loop_family.js';
import type { LoopPolynomials } from '../../../src/perturb/proof/margin_statement.js';
import { type Slope, SlopeField } from '../../../src/perturb/proof/slope.js';
import { openedLoopOver, type SlopeLoop } from '../../../src/perturb/proof/slope_cycle.js';
import { SlopeEvaluation, Unprovable } from '../../../src/perturb/proof/slope_evaluation.js';
import { timingsOver } from '../../../src/perturb/proof/slope_timing.js';
import type { Spec } from '../../../src/spec/spec.js';
import { motorWith } from '../../verdict/motor.js';

function pointOf(spec: Spec): LoopPoint {
  return new LoopPoint(spec, new Map(), spec.requirements[1]);
}

type Change = [from: string, to: string];
const declare = (definition: string): Change => ['parameters:', `parameters:\n  ${definition}`];
const fixedDeadTime: Change = ['{ of: speed, unit: rad/s }', '{ of: speed, dead_time: 3.4 ms, unit: rad/s }'];
const movingDeadTime: Change[] = [
  declare('transport: { nominal: 2.3 ms, from: 0.5 ms, to: 6 ms }'),
  ['{ of: speed, unit: rad/s }', '{ of: speed, dead_time: transport, unit: rad/s }'],
];
const movingDelay: Change[] = [
  declare('wait: { nominal: 1 ms, from: 0.5 ms, to: 5 ms }'),
  ['delay: 1 ms', 'delay: wait'],
];
const clockError: Change[] = [
  declare('clock: { nominal: 0 %, from: -4 %, to: 5 % }'),
  ['every: 2 ms', 'every: (2 ms)*(1 + clock)'],
];

const restingAt = (value: string): Change => [
  'goal: { unit: rad/s }',
  `goal: { unit: rad/s, rest: ${value} }`,
];
const drivenWithin = (most: string): Change => [
  'of: command, unit: V',
  `of: command, range: [-${most}, ${most}], unit: V`,
];

function polynomialsOf(family: LoopFamily, box: Interval[]): LoopPolynomials[] {
  const loops = family.polynomials(new SlopeField(box));
  if ('cut' in loops) throw new Error('the box is too wide for one look');
  return loops;
}

/** Whether every entry of one plant's loop lies between the bounds. */
function holds(over: SlopeLoop, one: StateEquations): boolean {
  const n = over.a.length;
  if (one.a.rows !== n) return false;
  const between = ({ range }: Slope, value: number): boolean => {
    const off = 1e-12 * (1 + Math.abs(value));
    return range[0] <= value + off && range[1] >= value - off;
  };
  return (
    over.a.every((row, i) => row.every((entry, j) => between(entry, one.a.data[i * n + j]))) &&
    over.b.every((entry, i) => between(entry, one.b.data[i])) &&
    over.c.every((entry, i) => between(entry, one.c.data[i])) &&
    between(over.d, one.d.data[0])
  );
}

function familyOf(spec: Spec): LoopFamily {
  return new LoopFamily(spec, new Map(), spec.requirements[1], new ParameterSpace(spec.parameters));
}

const share = fc.double({ min: 0, max: 1, noNaN: true });

describe('the loop of all plants of a box', () => {
  // The one plant's loop is held against published margins in the tests of the linear analysis.
  it.each([
    ['two parameters of the plant', [], 2],
    ['a fixed dead time and a long computing delay', [fixedDeadTime, ['delay: 1 ms', 'delay: 5 ms']], 2],
    ['a dead time that is a parameter', movingDeadTime, 3],
    ['a computing delay that is a parameter', movingDelay, 3],
    ['a clock error', clockError, 3],
  ] as [string, Change[], number][])(
    'holds the opened loop of every single plant: %s',
    (_, changes, size) => {
      const spec = motorWith(...changes);
      const { linearisation } = pointOf(spec);
      const nominal = spec.parameters.map((parameter) => parameter.nominal);
      const schedule = scheduleOf(linearisation.loop, nominal);
      expect(spec.parameters).toHaveLength(size);
      const shares = fc.array(share, { minLength: size, maxLength: size });
      fc.assert(
        fc.property(
          shares,
          shares,
          fc.double({ min: 1e-6, max: 0.2, noNaN: true }),
          (corner, plant, width) => {
            const box = spec.parameters.map(({ low, high }, i): Interval => {
              const from = low + corner[i] * (high - low) * (1 - width);
              return [from, from + width * (high - low)];
            });
            const parameters = box.map(([low, high], i) => Math.min(high, low + plant[i] * (high - low)));
            const field = new SlopeField(box);
            const evaluation = new SlopeEvaluation(field, (leaf, index) =>
              leaf === 'parameter' ? field.variable(index) : field.constant(0),
            );
            const timings = timingsOver(linearisation.loop, schedule, evaluation);
            if ('cut' in timings) throw new Error('too wide');
            const loops = timings.map((timing) => openedLoopOver(linearisation, timing, evaluation));
            const one = openedLoop(linearisation, scheduleOf(linearisation.loop, parameters), {
              parameter: parameters,
            });
            expect(loops.some((over) => holds(over, one))).toBe(true);
          },
        ),
        { seed: 91, numRuns: 60 },
      );
    },
  );

  it('has one order of deliveries after another where a dead time moves over sampling instants', () => {
    const spec = motorWith(...movingDeadTime);
    const family = familyOf(spec);
    const [[low], ...others] = family.box;
    const statesOver = (box: Interval): number[] => {
      const loops = family.polynomials(new SlopeField([box, ...others]));
      return 'cut' in loops ? [] : loops.map(({ denominator }) => denominator.length - 1);
    };
    // Late by 1.5 to 4.5 ms in all, where samples come every 2 ms and the actuator follows 1 ms after each.
    const some = statesOver([low, 3.5e-3]);
    expect(some).toHaveLength(4);
    expect(new Set(some).size).toBeGreaterThan(1);
    expect(statesOver([low, 20e-3])).toEqual([]);
    expect(statesOver([1.2e-3, 1.3e-3])).toHaveLength(1);
  });

  it('is as narrow as its box', () => {
    const spec = motorWith();
    const family = familyOf(spec);
    const width = (size: number): number => {
      const box = family.box.map(([low, high]): Interval => [low, low + size * (high - low)]);
      const [{ denominator, numerator }] = polynomialsOf(family, box);
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
    const family = familyOf(spec);
    expect(family.box).toHaveLength(1);
    const [{ numerator }] = polynomialsOf(family, family.box);
    expect(numerator.some(({ slopes }) => slopes[0][1] !== 0)).toBe(true);
  });

  it('takes any point of rest of a loop that is affine, since it linearises the same everywhere', () => {
    const atRest = (value: string): string => {
      const spec = motorWith(['goal: { unit: rad/s }', `goal: { unit: rad/s, rest: ${value} }`]);
      const family = familyOf(spec);
      return JSON.stringify(polynomialsOf(family, family.box));
    };
    expect(atRest('3 rad/s')).toBe(atRest('0 rad/s'));
  });

  it('says why there is no proof where the timing of several controllers moves', () => {
    const timing = motorWith(
      declare('clock: { nominal: 0 %, from: -4 %, to: 5 % }'),
      [
        'controllers:',
        'controllers:\n  outer: { every: (4 ms)*(1 + clock), signals: { kept: { value: goal, unit: rad/s } } }',
      ],
      ['goal - tacho', 'kept - tacho'],
    );
    expect(() => {
      const family = familyOf(timing);
      family.polynomials(new SlopeField(family.box));
    }).toThrow(Unprovable);
  });

  it('cannot be proved at once on a box where a range acts in some plants and not in others', () => {
    const spec = motorWith(restingAt('3 rad/s'), drivenWithin('2 V'));
    const family = familyOf(spec);
    const [lag, [low, high]] = family.box;
    // 3 rad/s needs 2.5 V at the least gain and 1 V at the greatest.
    expect(family.polynomials(new SlopeField([lag, [low, high]]))).toHaveProperty('cut');
    expect(polynomialsOf(family, [lag, [2.4, 2.6]])).toHaveLength(1);
  });
});
