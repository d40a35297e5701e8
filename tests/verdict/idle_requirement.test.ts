import { describe, expect, it } from 'vitest';
import { PlantEvaluator } from '../../src/measure/evaluate_plant.js';
import { measureNamed } from '../../src/measure/index.js';
import type { MeasureResult } from '../../src/measure/measure.js';
import { idleRequirement } from '../../src/verdict/idle_requirement.js';
import { judgeSpec } from '../../src/verdict/judge_spec.js';
import { smallSpecOf } from '../small_loop.js';

const values = (...of: number[]): MeasureResult[] => of.map((value) => ({ kind: 'value', value }));

/** What is said of one requirement with these results. */
function said(text: string, results: MeasureResult[], still = false): string | undefined {
  const spec = smallSpecOf({
    inputs: 'u: {}\nd: {}',
    plant: 'y: { lag: 1 s, of: drive }\nother: { lag: 1 s, of: d }',
    sensors: 'seen: { of: y }',
    controllers: 'law:\n  every: 0.1 s\n  signals:\n    command: { value: u - seen }',
    actuators: 'drive: { of: command, range: [-1, 1] }',
    scenarios: 'run: { lasts: 9 s, inputs: { u: { step: 1, at: 1 s } } }',
    requirements: [`{ name: R, ${text} }`],
  });
  const [requirement] = spec.requirements;
  return idleRequirement(requirement, measureNamed(requirement.measure).description, results, still);
}

describe('a limit beyond what the measure can be', () => {
  it.each([
    ['measure: gain_margin, at: drive, at_least: 0 dB', "of 'gain_margin' no plant gives less than 1"],
    ['measure: phase_margin, at: drive, at_least: 0 deg, scale: 1 deg', 'no plant gives less than 0'],
    ['measure: saturated_share, of: drive, in: run, at_most: 100 %', 'no plant gives more than 1'],
    [
      'measure: duty, of: drive, in: run, over: 1 s, between: [0, 1]',
      'less than 0 and no plant gives more than 1',
    ],
  ])('%s', (text, words) => {
    expect(said(text, values(0.5))).toContain(words);
  });

  it('is none where one of two ends can be broken', () => {
    expect(
      said('measure: duty, of: drive, in: run, over: 1 s, between: [0, 0.9]', values(0.5)),
    ).toBeUndefined();
    expect(said('measure: largest_value, of: y, in: run, at_most: 1', values(0.5))).toBeUndefined();
  });
});

describe('a limit that every plant is far away from', () => {
  const overshoot = 'measure: overshoot, of: y, to: u, in: run, at_most: 50 %';

  it('is pointed out by how much', () => {
    expect(said(overshoot, values(1e-5, 2e-4))).toBe(
      "the largest 'overshoot' of all plants, 0.0002, is 2,500 times below its limit of 0.5 (SI)",
    );
    expect(said('measure: delay_margin, at: drive, at_least: 1 us', values(0.3, 0.002))).toBe(
      "the smallest 'delay_margin' of all plants, 0.002, is 2,000 times above its limit of 0.000001 (SI)",
    );
  });

  it('is none where one plant comes near, gives zero, or has no number', () => {
    expect(said(overshoot, values(1e-5, 1e-3))).toBeUndefined();
    expect(said(overshoot, values(0, 0))).toBeUndefined();
    expect(said(overshoot, [...values(1e-5), { kind: 'never', why: '', left: 1 }])).toBeUndefined();
    expect(said(overshoot, [])).toBeUndefined();
  });

  it('is pointed out where a margin is infinite everywhere', () => {
    const infinite = values(Number.POSITIVE_INFINITY, Number.POSITIVE_INFINITY);
    expect(said('measure: phase_margin, at: drive, at_least: 30 deg', infinite)).toBe(
      "'phase_margin' is infinite on every plant",
    );
  });
});

describe('a scenario in which the signal never moves', () => {
  const text = 'measure: peak_deviation, of: other, to: d, in: run, at_most: 1';

  it('is pointed out', () => {
    expect(said(text, values(0), true)).toBe("'other' and 'd' never move in scenario 'run'");
  });

  it('is found by the evaluator', () => {
    const spec = smallSpecOf({
      inputs: 'u: {}\nd: {}',
      plant: 'y: { lag: 1 s, of: u }\nother: { lag: 1 s, of: d }',
      scenarios: 'run: { lasts: 9 s, inputs: { u: { step: 1, at: 1 s } } }',
      requirements: [
        `{ name: A, ${text} }`,
        '{ name: B, measure: peak_deviation, of: y, to: u, in: run, at_most: 1 }',
        '{ name: C, measure: peak_deviation, of: other, to: u, in: run, at_most: 1 }',
        '{ name: D, measure: over_time, in: run, holds: { throughout: other < 1, scale: 1 }, at_least: 0 }',
      ],
    });
    const still = new PlantEvaluator(spec, new Map()).staysStill(new Float64Array(0));
    expect(still).toEqual([true, false, false, true]);
    const [, , , statement] = spec.requirements;
    const measure = measureNamed('over_time').description;
    expect(idleRequirement(statement, measure, values(1), true)).toBe(
      "no signal in its statement moves in scenario 'run'",
    );
  });
});

describe('a judged spec', () => {
  it('says of what holds whether it guards nothing, and nothing of what is broken', async () => {
    const spec = smallSpecOf({
      inputs: 'u: {}\nd: {}',
      plant: 'y: { lag: 1 s, of: u }\nother: { lag: 1 s, of: d }',
      scenarios: 'run: { lasts: 9 s, inputs: { u: { step: 1, at: 1 s } } }',
      requirements: [
        `{ name: STILL, measure: peak_deviation, of: other, to: d, in: run, at_most: 1 }`,
        '{ name: FAR, measure: largest_value, of: y, in: run, at_most: 5000 }',
        '{ name: NEAR, measure: largest_value, of: y, in: run, at_most: 1.1 }',
        '{ name: BROKEN, measure: smallest_value, of: other, in: run, at_least: 1 }',
      ],
    });
    const { requirements } = await judgeSpec(spec, new Map(), { workers: 1 });
    expect(requirements.map(({ guardsNothing }) => guardsNothing)).toEqual([
      "'other' and 'd' never move in scenario 'run'",
      expect.stringMatching(/^the largest 'largest_value' of all plants, 1, is 5,\d00 times below/),
      undefined,
      undefined,
    ]);
    expect(requirements[3].verdict.kind).toBe('broken');
  });

  it('does not count a small change since the latched build against its bound', () => {
    const bound = 'measure: change_since_latched, of: kp, at_most: 10 %';
    const spec = smallSpecOf({
      inputs: 'u: {}',
      plant: 'y: { integral: drive*(1 1/s) }',
      sensors: 'seen: { of: y }',
      controllers: 'law: { every: 100 ms, signals: { command: { value: kp*(u - seen) } } }',
      actuators: 'drive: { of: command }',
      coefficients: 'kp: drive.kp',
      requirements: [`{ name: R, ${bound} }`],
    });
    const { description } = measureNamed('change_since_latched');
    expect(idleRequirement(spec.requirements[0], description, values(1e-6), false)).toBeUndefined();
  });
});
