import fc from 'fast-check';
import { describe, expect, it } from 'vitest';
import { Linearisation } from '../../../src/linear/linearise.js';
import { type PointOfRest, pointOfRest } from '../../../src/linear/point_of_rest.js';
import { expandLoop } from '../../../src/loop/expand.js';
import { ParameterSpace } from '../../../src/perturb/parameter_space.js';
import type { Interval } from '../../../src/perturb/proof/interval.js';
import { SlopeField } from '../../../src/perturb/proof/slope.js';
import { SlopeEvaluation, Unprovable } from '../../../src/perturb/proof/slope_evaluation.js';
import { type KeptGroup, type KeptValues, restOver } from '../../../src/perturb/proof/slope_rest.js';
import type { Spec } from '../../../src/spec/spec.js';
import { proofOf } from '../../../src/verdict/prove.js';
import { motorWith } from '../../verdict/motor.js';

type Change = [from: string, to: string];
const resting: Change = ['goal: { unit: rad/s }', 'goal: { unit: rad/s, rest: 3 rad/s }'];
const ranged: Change = ['of: command, unit: V', 'of: command, range: [-24 V, 24 V], unit: V'];
/** Drag that grows with the square of the speed. */
const curved: Change = [
  'speed: { lag: lag, of: drive, gain: gain, unit: rad/s }',
  'speed: { integral: "(gain*drive - speed - (0.02 s/rad)*speed*abs(speed))/lag", unit: rad/s }',
];

function partsOf(spec: Spec) {
  const closed = new Linearisation(expandLoop(spec, new Map()));
  const { loop } = closed;
  const restAt = (plant: readonly number[]): PointOfRest => {
    const found = pointOfRest(closed, plant, loop.inputRest);
    if (found.kind === 'none') throw new Error(found.why);
    return found.point;
  };
  const over = (box: readonly Interval[]): KeptValues => {
    const field = new SlopeField(box);
    const middle = box.map(([low, high]) => low + (high - low) / 2);
    return restOver(field, closed, restAt(middle), (values) => {
      const evaluation: SlopeEvaluation = new SlopeEvaluation(field, (leaf, index) => {
        if (leaf === 'parameter') return field.variable(index);
        if (leaf === 'input') return field.constant(loop.inputRest[index]);
        if (leaf === 'reading') return evaluation.of(loop.readings[index].sampled);
        return leaf === 'noise' ? field.constant(0) : values[leaf as KeptGroup][index];
      });
      return evaluation;
    });
  };
  return { restAt, over };
}

const share = fc.double({ min: 0, max: 1, noNaN: true });

// The point of rest of one plant, found by Newton's method, is the outside reference.
describe('bounds of the point of rest', () => {
  it.each([
    ['a range that does not act', [resting, ranged]],
    ['a curved plant', [resting, curved]],
  ] as [string, Change[]][])('hold that of every plant of a box: %s', (_, changes) => {
    const spec = motorWith(...changes);
    const { restAt, over } = partsOf(spec);
    fc.assert(
      fc.property(
        share,
        share,
        fc.double({ min: 1e-6, max: 0.3, noNaN: true }),
        share,
        share,
        (a, b, width, s, t) => {
          const box = spec.parameters.map(({ low, high }, i): Interval => {
            const from = low + [a, b][i] * (high - low) * (1 - width);
            return [from, from + width * (high - low)];
          });
          const plant = box.map(([low, high], i) => Math.min(high, low + [s, t][i] * (high - low)));
          const bounds = over(box);
          const rest = restAt(plant);
          for (const group of ['state', 'memory', 'held'] as const) {
            rest[group].forEach((value, i) => {
              const off = 1e-11 * (1 + Math.abs(value));
              const [low, high] = bounds[group][i].range;
              expect(low).toBeLessThanOrEqual(value + off);
              expect(high).toBeGreaterThanOrEqual(value - off);
            });
          }
        },
      ),
      { seed: 95, numRuns: 60 },
    );
  });

  it('are as narrow as their box', () => {
    const { over } = partsOf(motorWith(resting, curved));
    const { held } = over([
      [0.05, 0.05 + 1e-6],
      [2, 2 + 1e-6],
    ]);
    const [[low, high]] = held.map(({ range }) => range);
    expect(high - low).toBeLessThan(1e-5);
  });

  it('are not claimed where a value is free at rest', () => {
    const spec = motorWith([
      'integral: { value: before(integral) + ki*(2 ms)*error, unit: V }',
      'integral: { value: before(integral) + 0*ki*(2 ms)*error, unit: V }',
    ]);
    expect(() => partsOf(spec).over(spec.parameters.map(({ low, high }): Interval => [low, high]))).toThrow(
      Unprovable,
    );
  });

  it.each([
    ['within ranges', [resting, ranged]],
    ['of curved plants', [resting, curved]],
  ] as [string, Change[]][])('let a margin be proved at a point of rest that moves, %s', (_, changes) => {
    const spec = motorWith(...changes);
    const requirement = spec.requirements[2];
    const space = new ParameterSpace(spec.parameters);
    expect(proofOf(spec, new Map(), requirement, space, () => false)!.proof.kind).toBe('proved');
  });
});
