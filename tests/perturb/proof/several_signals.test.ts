import { expect, it } from 'vitest';
import { ParameterSpace } from '../../../src/perturb/parameter_space.js';
import { proofOf } from '../../../src/verdict/prove.js';
import { smallSpecOf } from '../../small_loop.js';

// A proof over intervals is about the one response of a loop that is opened at one signal.
it('no proof is tried of a loop that is opened at several signals, and it is said why', () => {
  const proofAt = (at: string) => {
    const spec = smallSpecOf({
      parameters: 'rate: { nominal: 10 1/s, from: 8 1/s, to: 12 1/s }',
      inputs: 'u: {}',
      plant: 'y: { integral: rate*drive }',
      sensors: 'seen: { of: y }',
      controllers: 'law:\n  every: 10 ms\n  signals:\n    command: { value: 4*(u - seen) }',
      actuators: 'drive: { of: command }',
      requirements: [`{ name: A, measure: gain_margin, at: ${at}, at_least: 1.2 }`],
    });
    const space = new ParameterSpace(spec.parameters, spec.perturbation);
    return proofOf(spec, new Map(), spec.requirements[0], space, () => false);
  };
  expect(proofAt('drive')).toMatchObject({ proof: { kind: 'proved' } });
  expect(proofAt('[drive]')).toEqual(proofAt('drive'));
  expect(proofAt('[drive, seen]')).toMatchObject({
    proof: { kind: 'open', boxes: 0, why: 'the loop is opened at several signals at once (drive, seen)' },
    counterexample: undefined,
  });
});
