import fc from 'fast-check';
import { describe, expect, it } from 'vitest';
import { PlantEvaluator } from '../../../src/measure/evaluate_plant.js';
import { ParameterSpace } from '../../../src/perturb/parameter_space.js';
import { LoopFamily } from '../../../src/perturb/proof/loop_family.js';
import { proveClaim } from '../../../src/perturb/proof/prove_claim.js';
import type { Spec } from '../../../src/spec/spec.js';
import { judge } from '../../../src/verdict/judge.js';
import { proofOf } from '../../../src/verdict/prove.js';
import type { Proof } from '../../../src/verdict/run.js';
import { publishedCase } from '../../published.js';
import { smallSpecOf } from '../../small_loop.js';

type Bounds = [low: number, high: number];
const { gain_per_s, delay_s } = publishedCase('G08').given;
const published = (figure: string): number => publishedCase('G08').expect[figure].value as number;
const period = 0.05;

/** An integrator with dead time whose output is sampled and held, gain (1/s) and dead time (s) between bounds. */
function loopOf(gain: Bounds, late: Bounds, requirement: string): Spec {
  const bounds = ([low, high]: Bounds, unit: string): string =>
    `{ nominal: ${(low + high) / 2} ${unit}, from: ${low} ${unit}, to: ${high} ${unit} }`;
  return smallSpecOf({
    parameters: `gain: ${bounds(gain, '1/s')}\nlate: ${bounds(late, 's')}`,
    inputs: 'goal: {}',
    plant: 'level: { integral: gain*drive }',
    sensors: 'gauge: { of: level, dead_time: late }',
    controllers: `law: { every: ${period} s, signals: { asked: { value: goal - gauge } } }`,
    actuators: 'drive: { of: asked }',
    requirements: [`{ name: R, at: drive, ${requirement} }`],
  });
}

function failuresOf(spec: Spec): (plant: Float64Array) => boolean {
  const evaluator = new PlantEvaluator(spec, new Map());
  return (plant) => judge(spec.requirements[0], evaluator.evaluate(plant, 0)[0]).kind === 'broken';
}

/**
 * Proves a requirement of the published loop, sampled. A hold is late by half a period, which is taken off the dead time; what is
 * left differs by the square of the period, here below 0.4 %.
 */
function proofFor(requirement: string): Proof | undefined {
  const [short, long] = delay_s.map((seconds: number) => seconds - period / 2);
  const spec = loopOf(gain_per_s, [short, long], requirement);
  const space = new ParameterSpace(spec.parameters);
  return proofOf(spec, new Map(), spec.requirements[0], space, failuresOf(spec))?.proof;
}

// Source: closed forms of reference/published, case G08: the worst margins over a box of gain and delay.
describe('an integrator with a dead time between bounds', () => {
  const phase = (share: number): string =>
    `measure: phase_margin, at_least: ${share * published('least_phase_margin')} deg`;
  const gain = (share: number): string =>
    `measure: gain_margin, at_least: ${share * published('least_gain_margin')}`;

  it.each([
    ['phase margin', phase],
    ['gain margin', gain],
  ])('G08: the %s is proved just below the published worst one, and refuted just above it', (_, claim) => {
    expect(proofFor(claim(0.97))?.kind).toBe('proved');
    expect(proofFor(claim(1.03))?.kind).toBe('refuted');
  });

  it('is never proved where a search of the box finds a break, over random boxes', () => {
    const counts = { proved: 0, refuted: 0, open: 0 };
    const share = fc.integer({ min: 0, max: 1000 }).map((x) => x / 1000);
    const boundsIn = (least: number, most: number) =>
      fc.tuple(share, share).map(([at, width]): Bounds => {
        const low = least + (most - least) * at * 0.8;
        return [low, low + (most - least) * 0.2 * (0.05 + width)];
      });
    fc.assert(
      fc.property(boundsIn(0.5, 10), boundsIn(0, 0.2), share, (gain, late, x) => {
        const atLeast = 10 + 70 * x;
        const spec = loopOf(gain, late, `measure: phase_margin, at_least: ${atLeast} deg`);
        const family = new LoopFamily(
          spec,
          new Map(),
          spec.requirements[0],
          new ParameterSpace(spec.parameters),
        );
        const fails = failuresOf(spec);
        const failsAt = (plant: readonly number[]): boolean => fails(Float64Array.from(plant));
        const claim = { kind: 'phase_margin', atLeast: atLeast * (Math.PI / 180) } as const;
        const result = proveClaim(family, claim, failsAt, 40);
        counts[result.kind]++;
        if (result.kind !== 'proved') return;
        const between = ([low, high]: Bounds): number[] =>
          [0, 0.3, 0.7, 1].map((part) => low + (high - low) * part);
        for (const k of between(gain))
          for (const delay of between(late)) expect(failsAt([k, delay])).toBe(false);
      }),
      { seed: 82, numRuns: 40 },
    );
    expect(counts.proved).toBeGreaterThan(6);
    expect(counts.refuted).toBeGreaterThan(6);
  });
});
