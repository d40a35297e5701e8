import { describe, expect, it } from 'vitest';
import { judgeSpec } from '../../src/verdict/judge_spec.js';
import type { RequirementRun } from '../../src/verdict/run.js';
import { motorWith } from './motor.js';

const alone = { workers: 1 };

async function requirements(...changes: [string, string][]): Promise<RequirementRun[]> {
  return (await judgeSpec(motorWith(...changes), new Map(), alone)).requirements;
}

describe('judging a spec', () => {
  it('meets and proves the margins of the motor within its bounds', async () => {
    const [overshoot, ...margins] = await requirements();
    expect(overshoot).toMatchObject({ verdict: { kind: 'met' }, evidence: { kind: 'tried' } });
    for (const margin of margins) {
      expect(margin).toMatchObject({
        verdict: { kind: 'met' },
        evidence: { kind: 'proved' },
        proof: { kind: 'proved' },
      });
    }
  });

  it('names the worst plant, how far the bounds may grow and what matters', async () => {
    const [, phase] = await requirements();
    expect(phase.worst.headroom).toBeLessThan(phase.nominal.headroom!);
    expect(phase.reach!.factor).toBeGreaterThan(1);
    expect(phase.effects!.map(({ name }) => name).sort()).toEqual(['gain', 'lag']);
    expect(phase.effects![0].headroom).toBeGreaterThan(0);
    expect(phase.shrunk).toBeUndefined();
  });

  it('shrinks a counterexample to the fewest parameters', async () => {
    const [, , , modulus] = await requirements(['at_least: 0.7 }', 'at_least: 0.93 }']);
    expect(modulus.verdict.kind).toBe('broken');
    expect(modulus.evidence.kind).toBe('tried');
    const moved = modulus.shrunk!.parameters.filter((parameter) => parameter.moved !== 0);
    expect(moved).toHaveLength(1);
    expect(modulus.shrunk!.headroom).toBeLessThan(0);
    expect(modulus.shrunk!.headroom).toBeGreaterThan(-0.02);
    expect(modulus.reach!.factor).toBeLessThan(1);
    const size = Math.max(...modulus.worst.parameters.map((parameter) => Math.abs(parameter.moved)));
    expect(Math.abs(moved[0].moved)).toBeLessThan(size);
  });

  it('counts the plants and what the search took', async () => {
    const run = await judgeSpec(motorWith(), new Map(), alone);
    expect(run.plants).toMatchObject({ nominal: 1, single: 4, corner: 4, independent: 40, saved: 0 });
    expect(run.effort!.searched).toBeLessThanOrEqual(4 * 60);
    expect(run.effort!.searched).toBeGreaterThan(0);
    for (const { counts, effort } of run.requirements) {
      const tried = Object.values(run.plants).reduce((sum, count) => sum + count, 0);
      expect(counts.tried).toBe(tried + effort!.searched);
    }
  });

  it('spends nothing on the search where it is told so', async () => {
    const run = await judgeSpec(motorWith(['search: 60', 'search: 0']), new Map(), alone);
    expect(run.effort!.searched).toBe(0);
  });

  it('tries saved counterexamples before all but the nominal plant', async () => {
    const saved = [Float64Array.of(0.06, 2.5), Float64Array.of(0.04, 1.5)];
    const run = await judgeSpec(motorWith(), new Map(), { ...alone, saved });
    expect(run.plants.saved).toBe(2);
  });

  it('is judged on the nominal plant alone where it is asked so', async () => {
    const [, phase] = await requirements(['at_least: 75 deg }', 'at_least: 75 deg, holds_for: nominal }']);
    expect(phase.evidence).toEqual({ kind: 'nominal_only' });
    expect(phase.claim).toBeUndefined();
    expect(phase.reach).toBeUndefined();
    expect(phase.worst).toEqual(phase.nominal);
  });

  it('passes over plants that a condition keeps out', async () => {
    const run = await judgeSpec(
      motorWith(['search: 60 }', 'search: 60, only_where: "gain < lag*(45 rad/(V*s^2))" }']),
      new Map(),
      alone,
    );
    for (const { worst } of run.requirements) {
      const [lag, gain] = worst.parameters.map(({ value }) => value);
      expect(gain).toBeLessThan(lag * 45);
    }
    expect(run.plants.corner).toBeLessThan(4);
    expect(run.plants.independent).toBe(40);
  });
});

describe('timing and scenario values as parameters like any other', () => {
  it('a clock error, a delay and the size of a step', async () => {
    const { requirements: found } = await judgeSpec(
      motorWith(
        ['    every: 2 ms', '    every: (2 ms)*(1 + clock)'],
        ['    delay: 1 ms', '    delay: late'],
        ['step: 10 rad/s', 'step: size'],
        [
          'parameters:',
          'parameters:\n  clock: { nominal: 0, from: -0.01, to: 0.01 }\n  late: { nominal: 1 ms, from: 0.2 ms, to: 1.8 ms }\n  size: { nominal: 10 rad/s, spread: 50 % }',
        ],
        ['plants: 40, seed: 5, search: 60', 'plants: 10, seed: 5, search: 20'],
      ),
      new Map(),
      alone,
    );
    const [overshoot, phase, gain] = found;
    for (const { verdict, counts } of found) {
      expect(verdict.kind).not.toBe('unjudged');
      expect(counts.unjudged).toBe(0);
    }
    const effectOf = (name: string): number => phase.effects!.find((one) => one.name === name)!.headroom;
    expect(effectOf('late')).toBeGreaterThan(effectOf('clock'));
    expect(effectOf('clock')).toBeGreaterThan(0);
    // The loop is linear: the size of the step changes no overshoot.
    expect(overshoot.effects!.find((one) => one.name === 'size')!.headroom).toBeLessThan(1e-6);
    expect(gain.evidence.kind).toBe('proved');
    expect(phase.proof).toMatchObject({ kind: 'open', why: expect.stringContaining('budget') });
  });
});
