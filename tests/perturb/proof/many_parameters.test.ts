import { describe, expect, it } from 'vitest';
import { PlantEvaluator } from '../../../src/measure/evaluate_plant.js';
import { ParameterSpace } from '../../../src/perturb/parameter_space.js';
import { LoopFamily } from '../../../src/perturb/proof/loop_family.js';
import { proveClaim } from '../../../src/perturb/proof/prove_claim.js';
import type { Spec } from '../../../src/spec/spec.js';
import { judge } from '../../../src/verdict/judge.js';
import { proofOf } from '../../../src/verdict/prove.js';
import { smallSpecOf } from '../../small_loop.js';

/** A lag with a filtered and late reading: five parameters move the loop, and a sixth does not. */
function loopOf(spread: number, requirement: string): Spec {
  return smallSpecOf({
    parameters: [
      `gain: { nominal: 2 1/s, spread: ${spread} % }`,
      `lag: { nominal: 0.3 s, spread: ${spread} % }`,
      `filter: { nominal: 50 ms, spread: ${spread} % }`,
      `transport: { nominal: 62 ms, spread: ${spread} % }`,
      `wait: { nominal: 8 ms, spread: ${spread} % }`,
      `unseen: { nominal: 1, spread: ${spread} % }`,
    ].join('\n'),
    inputs: 'goal: {}\nload: {}',
    plant: [
      'level: { integral: gain*drive - level/lag }',
      'aside: { lag: 1 s, of: load, gain: unseen }',
    ].join('\n'),
    sensors: 'gauge: { of: level, filter: filter, dead_time: transport }\nother: { of: aside }',
    controllers: `law: { every: 20 ms, delay: wait, signals: { asked: { value: goal + 0*other - 2*gauge } } }`,
    actuators: 'drive: { of: asked }',
    requirements: [`{ name: R, at: drive, ${requirement} }`],
  });
}

function partsOf(spec: Spec) {
  const [requirement] = spec.requirements;
  const evaluator = new PlantEvaluator(spec, new Map());
  const breaks = (plant: Float64Array): boolean =>
    judge(requirement, evaluator.evaluate(plant, 0)[0]).kind === 'broken';
  return { requirement, breaks, space: new ParameterSpace(spec.parameters) };
}

describe('proofs with more than three parameters', () => {
  it('are found within the budget where there is room', () => {
    const spec = loopOf(5, 'measure: gain_margin, at_least: 3');
    const { requirement, breaks, space } = partsOf(spec);
    expect(proofOf(spec, new Map(), requirement, space, breaks)!.proof.kind).toBe('proved');
  });

  it('end open, with the share of the bounds that is left, where the budget is spent', () => {
    const spec = loopOf(5, 'measure: gain_margin, at_least: 3');
    const { requirement, space } = partsOf(spec);
    const family = new LoopFamily(spec, new Map(), requirement, space);
    const openShare = (budget: number): number => {
      const result = proveClaim(family, { kind: 'gain_margin', atLeast: 3 }, () => false, budget);
      return result.kind === 'open' ? result.openShare : 0;
    };
    const [few, more] = [openShare(30), openShare(70)];
    expect(few).toBeLessThanOrEqual(1);
    expect(more).toBeGreaterThan(0);
    expect(more).toBeLessThan(few);
  });

  it('halve the bounds of those alone that move the loop', () => {
    const spec = loopOf(10, 'measure: gain_margin, at_least: 3');
    const { requirement, space } = partsOf(spec);
    const family = new LoopFamily(spec, new Map(), requirement, space);
    const asked: number[] = [];
    const failsAt = (plant: readonly number[]): boolean => {
      asked.push(plant[5]);
      return false;
    };
    proveClaim(family, { kind: 'gain_margin', atLeast: 3 }, failsAt, 40);
    expect(asked.length).toBeGreaterThan(10);
    expect(new Set(asked)).toEqual(new Set([1]));
  });
});
