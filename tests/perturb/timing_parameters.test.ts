import { describe, expect, it } from 'vitest';
import { scheduleOf } from '../../src/loop/schedule.js';
import { PlantEvaluator } from '../../src/measure/evaluate_plant.js';
import { ParameterSpace } from '../../src/perturb/parameter_space.js';
import { judgeSpec } from '../../src/verdict/judge_spec.js';
import { motorWith } from '../verdict/motor.js';

type Change = [from: string, to: string];
/** A measure that size, timing and delay all move. */
const deviation: Change = [
  'overshoot, of: speed, to: goal, in: step, at_most: 30 %',
  'rms_deviation, of: speed, to: goal, in: step, at_most: 9 rad/s',
];
const declare = (definition: string): Change => ['parameters:', `parameters:\n  ${definition}`];

/** One way of writing a parameter, what it stands for as a plain number, and the value at which both are compared. */
const written: [title: string, parameter: string, place: string, withName: string, withNumber: string][] = [
  [
    'sampling jitter',
    'late: { nominal: 0 ms, from: 0 ms, to: 1.5 ms }',
    '    every: 2 ms',
    '    every: 2 ms\n    jitter: late',
    '    every: 2 ms\n    jitter: 1.5 ms',
  ],
  [
    'computing delay',
    'wait: { nominal: 1 ms, from: 0.5 ms, to: 5 ms }',
    '    delay: 1 ms',
    '    delay: wait',
    '    delay: 5 ms',
  ],
  [
    'phase',
    'first: { nominal: 0 ms, from: 0 ms, to: 1.3 ms }',
    '    every: 2 ms',
    '    every: 2 ms\n    phase: first',
    '    every: 2 ms\n    phase: 1.3 ms',
  ],
  [
    'clock error',
    'clock: { nominal: 0 %, from: -4 %, to: 5 % }',
    '    every: 2 ms',
    '    every: (2 ms)*(1 + clock)',
    '    every: 2.1 ms',
  ],
  [
    'dead time of a sensor',
    'transport: { nominal: 1 ms, from: 0 ms, to: 4.2 ms }',
    '{ of: speed, unit: rad/s }',
    '{ of: speed, dead_time: transport, unit: rad/s }',
    '{ of: speed, dead_time: 4.2 ms, unit: rad/s }',
  ],
  [
    'size of a step',
    'size: { nominal: 10 rad/s, from: 5 rad/s, to: 20 rad/s }',
    'step: 10 rad/s',
    'step: size',
    'step: 20 rad/s',
  ],
  [
    'height of a gust',
    'blow: { nominal: 10 rad/s, from: 5 rad/s, to: 20 rad/s }',
    'step: 10 rad/s,',
    'pulse: blow, for: 200 ms,',
    'pulse: 20 rad/s, for: 200 ms,',
  ],
  [
    'time of a step',
    'start_of: { nominal: 50 ms, from: 50 ms, to: 53.7 ms }',
    'at: 50 ms',
    'at: start_of',
    'at: 53.7 ms',
  ],
];

describe('timing and scenario values as parameters', () => {
  it.each(written)(
    '%s: at its bound the plant measures what the plain number gives',
    (_, definition, ...words) => {
      const [place, withName, withNumber] = words;
      const spec = motorWith(deviation, declare(definition), [place, withName]);
      const space = new ParameterSpace(spec.parameters);
      const upper = new Float64Array(space.size).with(0, 1);
      const varied = new PlantEvaluator(spec, new Map()).evaluate(space.plantAt(upper), 0);
      const plain = motorWith(deviation, [place, withNumber]);
      const nominal = Float64Array.from(plain.parameters, (parameter) => parameter.nominal);
      const fixed = new PlantEvaluator(plain, new Map()).evaluate(nominal, 0);
      const numberOf = (one: (typeof fixed)[number]): number => {
        if (one.kind !== 'value') throw new Error(`not measured: ${JSON.stringify(one)}`);
        return one.value;
      };
      varied.forEach((one, i) => {
        expect(numberOf(fixed[i])).toBeGreaterThan(0.1);
        expect(numberOf(one) / numberOf(fixed[i])).toBeCloseTo(1, 9);
      });
    },
  );

  it('one clock error moves the periods of a cascade together', () => {
    const outer = [
      '  outer:',
      '    every: (20 ms)*(1 + clock)',
      '    signals: { goal_kept: { value: goal, unit: rad/s } }',
    ];
    const spec = motorWith(
      deviation,
      ['controllers:', ['controllers:', ...outer].join('\n')],
      ['    every: 2 ms', '    every: (2 ms)*(1 + clock)'],
      ['goal - tacho', 'goal_kept - tacho'],
      declare('clock: { nominal: 0 %, from: -4 %, to: 5 % }'),
    );
    const evaluator = new PlantEvaluator(spec, new Map());
    const space = new ParameterSpace(spec.parameters);
    for (const share of [0.123456789, 0.7654321, 1]) {
      const [first] = evaluator.evaluate(space.plantAt(new Float64Array(space.size).with(0, share)), 0);
      expect(first.kind).toBe('value');
      const { period, ticksPerSecond } = scheduleOf(evaluator.loop, space.plantAt([share, 0, 0]));
      const [most, least] = [Math.max(...period), Math.min(...period)];
      expect(most).toBe(10 * least);
      expect(least / ticksPerSecond).toBeCloseTo(0.002 * (1 + 0.05 * share), 9);
    }
  });

  /** The motor for a fifth of a second, few plants, with a jitter up to some ms. */
  const withJitter = (most: string) =>
    motorWith(
      deviation,
      declare(`late: { nominal: 0 ms, from: 0 ms, to: ${most} }`),
      ['    every: 2 ms', '    every: 2 ms\n    jitter: late'],
      ['lasts: 1 s', 'lasts: 0.2 s'],
      ['plants: 40, seed: 5, search: 60', 'plants: 2, seed: 5, search: 2'],
    );

  it('matter like any other, and the reach may look at a jitter that no plant can have', async () => {
    const { requirements } = await judgeSpec(withJitter('1.9 ms'), new Map(), { workers: 1 });
    const [{ verdict, reach, effects }] = requirements;
    expect(verdict.kind).toBe('met');
    expect(effects!.find(({ name }) => name === 'late')!.headroom).toBeGreaterThan(0);
    // Beyond 1.05 times the bounds the jitter is longer than the period: no loop, and so no break.
    expect(reach!.factor).toBeGreaterThan(1);
  });

  it('block the merge with the reason where a plant within the bounds cannot be timed', async () => {
    const { requirements } = await judgeSpec(withJitter('3 ms'), new Map(), { workers: 1 });
    for (const { verdict } of requirements) {
      expect(verdict.kind).toBe('unjudged');
      expect(JSON.stringify(verdict)).toContain(
        'has a jitter of 0.003 s, expected 0 to less than its period',
      );
    }
  });
});
