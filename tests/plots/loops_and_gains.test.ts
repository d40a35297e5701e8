import { beforeAll, describe, expect, it } from 'vitest';
import type { CoefficientValues } from '../../src/loop/parts.js';
import { plotsOf } from '../../src/plots/index.js';
import type { SpecPlots } from '../../src/report/index.js';
import type { Spec } from '../../src/spec/spec.js';
import { judgeSpec } from '../../src/verdict/judge_spec.js';
import type { Reference } from '../../src/verdict/latched/reference.js';
import type { RequirementRun } from '../../src/verdict/run.js';
import { smallSpecOf } from '../small_loop.js';

const masks = [
  '{ name: M1, measure: largest_sensitivity, at: output, to_frequency: 0.3 rad/s, at_most: 0.6 }',
  '{ name: M2, measure: modulus_margin, at: output, at_least: 0.5 }',
  '{ name: M3, measure: sensitivity_peak, at: output, at_most: 6 dB }',
  '{ name: M4, measure: largest_following_gain, at: output, from_frequency: 3 rad/s, to_frequency: 20 rad/s, at_most: 0.8 }',
  '{ name: M5, measure: smallest_loop_gain, at: output, frequency: 0.2 rad/s, at_least: 2 }',
  '{ name: M6, measure: largest_loop_gain, at: output, from_frequency: 10 rad/s, between: [0.01, 0.5] }',
  '{ name: M7, measure: complementary_peak, at: output, at_least: 0.5 }',
];

/** A lag of 1 s under an integrating controller with a period of 50 ms and gains of the build. */
const axis = (requirements: string[], others = '', driven = 'output'): Spec =>
  smallSpecOf({
    coefficients: 'kp: kp\nki: { at: ki, unit: 1/s }',
    parameters: 'gain: { nominal: 1, spread: 40 % }\nsluggish: { nominal: 1 s, spread: 30 % }',
    inputs: 'target: { unit: V }',
    plant: `speed: { lag: sluggish, of: ${driven === 'output' ? 'drive' : 'drive + help'}, gain: gain, unit: V }${others && '\nother: { lag: 1 s, of: speed, unit: V }'}`,
    sensors: `seen: { of: speed, unit: V }${others && '\nside: { of: other, unit: V }'}`,
    controllers: `law:\n  every: 50 ms\n  signals:\n    output: { pid: { kp: kp, ki: ki }, of: 'target - seen', unit: V }${others}`,
    actuators: `drive: { of: output, unit: V }${driven === 'output' ? '' : '\nhelp: { of: aside, unit: V }'}`,
    scenarios: 'step:\n  lasts: 6 s\n  inputs: { target: { step: 2 V, at: 1 s } }',
    requirements: [
      ...requirements,
      '{ name: T1, measure: overshoot, of: speed, to: target, in: step, at_most: 90 % }',
    ],
  });

const numbers = (kp: number, ki: number): CoefficientValues =>
  new Map([
    ['kp', [kp]],
    ['ki', [ki]],
  ]);

/** What the reference holds of the coefficients is all that is drawn of it. */
const latchedTo = (kp: number, ki: number) => {
  const coefficient = (value: number, unit: string | null) => ({
    ...{ at: 'k', type: 'float', unit, format: null, fractional_bits: null, shape: [] },
    ...{ values: [value], stored: ['0'] },
  });
  const reference = {
    coefficients: { kp: coefficient(kp, null), ki: coefficient(ki, '1/s') },
  } as unknown as Reference;
  const changed = { latched: [kp], today: [1], elements: [0] };
  return {
    reference,
    since: {
      ...{ path: 'r.json', reference: undefined, spec: [], law: [] },
      coefficients: [
        { name: 'kp', ...changed },
        { name: 'ki', ...changed, latched: [ki] },
      ],
    },
  };
};

/** The spec judged on few plants. */
async function judgedQuickly(spec: Spec, coefficients = numbers(1, 1.2)) {
  const quick = { ...spec, perturbation: { ...spec.perturbation, plants: 3, search: 2 } };
  return { quick, judged: await judgeSpec(quick, coefficients, { workers: 1 }) };
}

async function drawn(
  spec: Spec,
  latched?: ReturnType<typeof latchedTo>,
  coefficients = numbers(1, 1.2),
): Promise<{ plots: SpecPlots; requirements: RequirementRun[] }> {
  const { quick, judged } = await judgedQuickly(spec, coefficients);
  return { plots: plotsOf(quick, coefficients, judged, latched, () => 0), requirements: judged.requirements };
}

describe('responses under their masks', () => {
  let plots: SpecPlots;
  let requirements: RequirementRun[];
  beforeAll(async () => {
    ({ plots, requirements } = await drawn(axis(masks), latchedTo(0.5, 0.4)));
  });
  const worstOf = (name: string): number => {
    const { result } = requirements.find((one) => one.name === name)!.worst;
    return result.kind === 'value' ? result.value : Number.NaN;
  };
  const tightest = (name: string) =>
    plots.gains.flatMap((plot) => plot.tightest).find(({ requirement }) => requirement === name)!;

  it('are one for each response that is limited, without limits that are no line', () => {
    expect(plots.gains.map(({ response, requirements: those }) => [response, [...those].sort()])).toEqual([
      ['sensitivity', ['M1', 'M2', 'M3']],
      ['following', ['M4']],
      ['loop', ['M5', 'M6']],
    ]);
  });

  it('carry each limit over its band, a modulus margin as one over it', () => {
    const half = Math.PI / 0.05;
    const fences = Object.fromEntries(
      plots.gains
        .flatMap((plot) => plot.fences)
        .map(({ requirement, from, to, value, forbidden }) => [requirement, [from, to, value, forbidden]]),
    );
    expect(fences.M1).toEqual([0, 0.3, 0.6, 'above']);
    expect(fences.M2).toEqual([0, half, 2, 'above']);
    expect(fences.M3).toEqual([0, half, 10 ** 0.3, 'above']);
    expect(fences.M4).toEqual([3, 20, 0.8, 'above']);
    expect(fences.M5).toEqual([0.2, 0.2, 2, 'below']);
    expect(fences.M6).toEqual([10, half, 0.5, 'above']);
  });

  it('are tightest where the judged number is taken: mark and measure agree', () => {
    expect(tightest('M2').value).toBeCloseTo(1 / worstOf('M2'), 6);
    for (const name of ['M1', 'M3', 'M4', 'M5', 'M6'])
      expect(tightest(name).value / worstOf(name)).toBeCloseTo(1, 6);
    expect(tightest('M1').frequency).toBeCloseTo(0.3, 9);
    expect(tightest('M5').frequency).toBe(0.2);
  });

  it('belong together: |S| is 1/|1 + L|, and the two parts of the closed loop differ by at most one', () => {
    const [loop] = plots.loops;
    const [sensitivity, following] = plots.gains;
    loop.frequencies.forEach((frequency, at) => {
      const same = sensitivity.frequencies.indexOf(frequency);
      if (same < 0) return;
      const [size, angle] = [loop.nominal.magnitude[at], loop.nominal.phase[at]];
      const onePlus = Math.hypot(1 + size * Math.cos(angle), size * Math.sin(angle));
      expect(sensitivity.nominal[same] * onePlus).toBeCloseTo(1, 9);
    });
    following.frequencies.forEach((frequency, at) => {
      const same = sensitivity.frequencies.indexOf(frequency);
      if (same >= 0)
        expect(Math.abs(following.nominal[at] - sensitivity.nominal[same])).toBeLessThanOrEqual(1 + 1e-9);
    });
  });

  it('have nominal and worst inside the band', () => {
    for (const { nominal, worst, low, high, plants } of plots.gains) {
      expect(plants).toBeGreaterThan(40);
      for (const curve of [nominal, ...worst.map(({ values }) => values)]) {
        curve.forEach((size, at) => {
          expect(size).toBeGreaterThanOrEqual(low[at]);
          expect(size).toBeLessThanOrEqual(high[at]);
        });
      }
    }
  });

  it('show each worst plant once, with all whose worst it is', () => {
    const names = plots.gains[0].worst.flatMap((one) => one.requirements);
    expect(new Set(names).size).toBe(names.length);
    expect(plots.gains[0].worst.find((one) => one.requirements.includes('M2'))!.requirements).toContain('M3');
  });

  it('have no band where one plant takes long', async () => {
    const { quick, judged } = await judgedQuickly(axis(masks));
    let time = 0;
    const slow = plotsOf(quick, numbers(1, 1.2), judged, undefined, () => {
      time += 200;
      return time;
    });
    expect(slow.gains.map(({ plants, low }) => [plants, low.some(Number.isFinite)])).toEqual([
      [0, false],
      [0, false],
      [0, false],
    ]);
  });
});

describe('latched coefficients', () => {
  it('are drawn as what today’s would be if they were the same numbers', async () => {
    const { quick, judged } = await judgedQuickly(axis(masks));
    const { traces, loops, gains } = plotsOf(quick, numbers(1, 1.2), judged, latchedTo(0.5, 0.4), () => 0);
    const asToday = plotsOf(quick, numbers(0.5, 0.4), judged, latchedTo(1, 1.2), () => 0);
    expect(traces[0].latched).toEqual(asToday.traces[0].nominal);
    expect(traces[0].nominal).toEqual(asToday.traces[0].latched);
    // An integrator's gain at low frequencies goes with ki, 0.4 against 1.2.
    expect(loops[0].latched!.magnitude[0] / loops[0].nominal.magnitude[0]).toBeCloseTo(1 / 3, 2);
    expect(gains[0].latched![0] / gains[0].nominal[0]).toBeCloseTo(3, 1);
  });

  it('are left out where there is no reference or nothing differs', async () => {
    const { plots } = await drawn(axis(masks));
    expect(plots.traces[0]).not.toHaveProperty('latched');
    expect(plots.loops[0]).not.toHaveProperty('latched');
    expect(plots.gains[0]).not.toHaveProperty('latched');
    const same = { ...latchedTo(1, 1.2), since: { ...latchedTo(1, 1.2).since, coefficients: [] } };
    expect((await drawn(axis(masks), same)).plots.traces[0]).not.toHaveProperty('latched');
  });
});

/**
 * A second controller with three times the period, of something that nothing listens to: the signal then changes three times
 * in a cycle, and yet the loop is the same. So every picture of the lifted loop is that of the plain one.
 */
describe('a signal that changes several times in a cycle', () => {
  const margins = [
    '{ name: G1, measure: gain_margin, at: output, at_least: 3 dB }',
    '{ name: G2, measure: phase_margin, at: output, at_least: 30 deg }',
    '{ name: G3, measure: modulus_margin, at: output, at_least: 0.4 }',
  ];
  let plain: SpecPlots;
  let lifted: SpecPlots;
  beforeAll(async () => {
    ({ plots: plain } = await drawn(axis(margins)));
    const idle = '\nslow:\n  every: 150 ms\n  signals:\n    aside: { value: side, unit: V }';
    ({ plots: lifted } = await drawn(
      axis([...margins, '{ name: S1, measure: peak_effort, of: aside, in: step, at_most: 9 V }'], idle),
    ));
  });

  it('is drawn with as many loci as changes, and says how many', () => {
    expect(plain.loops[0]).not.toHaveProperty('lifted');
    expect(lifted.loops[0].lifted!.changes).toBe(3);
    expect(lifted.loops[0].margins).toEqual([]);
  });

  it('is seen at one frequency as the plain loop', () => {
    const [one, three] = [plain.loops[0], lifted.loops[0]];
    three.frequencies.forEach((frequency, at) => {
      const before = one.frequencies.findLastIndex((other) => other <= frequency);
      if (before < 0 || before === one.frequencies.length - 1) return;
      // Between two points of the plain curve.
      const ends = [one.nominal.magnitude[before], one.nominal.magnitude[before + 1]];
      expect(three.nominal.magnitude[at]).toBeLessThanOrEqual(Math.max(...ends) * (1 + 1e-6));
      expect(three.nominal.magnitude[at]).toBeGreaterThanOrEqual(Math.min(...ends) * (1 - 1e-6));
    });
  });

  it('has loci that lie on the plain locus or its mirror image', () => {
    const { magnitude, phase } = plain.loops[0].nominal;
    const locus = magnitude.map((size, at) => [size * Math.cos(phase[at]), size * Math.sin(phase[at])]);
    for (const { real, imaginary } of lifted.loops[0].lifted!.nominal.flat()) {
      if (Math.hypot(real, imaginary) > 3 || Math.hypot(real, imaginary) < 0.05) continue;
      const nearest = Math.min(
        ...locus.map(([x, y]) => Math.hypot(real - x, Math.abs(imaginary) - Math.abs(y))),
      );
      expect(nearest).toBeLessThan(0.06);
    }
  });

  it('marks margins where the plain loop has them', () => {
    const marks = lifted.loops[0].lifted!.marks;
    expect(marks.map(({ requirement, kind }) => [requirement, kind])).toEqual([
      ['G1', 'gain'],
      ['G2', 'phase'],
    ]);
    const [gain, phase] = marks;
    const [plainGain, plainPhase] = ['G1', 'G2'].map(
      (name) => plain.loops[0].margins.find(({ requirement }) => requirement === name)!,
    );
    if (gain.curve === plainGain.curve) expect(-gain.at.real).toBeCloseTo(plainGain.start, 6);
    if (phase.curve === plainPhase.curve)
      expect(Math.abs(Math.atan2(phase.at.imaginary, phase.at.real))).toBeCloseTo(
        Math.abs(plainPhase.start),
        6,
      );
  });

  it('has the plain sensitivity as its largest singular value, folded at half the frequency of the cycle', () => {
    const [one, three] = [plain.gains[0], lifted.gains[0]];
    expect([one.meaning, three.meaning]).toEqual(['response', 'any_signal']);
    expect(Math.max(...three.frequencies)).toBeCloseTo(Math.PI / 0.15, 9);
    expect(Math.max(...three.nominal)).toBeCloseTo(Math.max(...one.nominal), 3);
    const [peak, plainPeak] = [three, one].map(({ tightest }) => tightest[0].value);
    expect(peak).toBeCloseTo(plainPeak, 5);
  });
});

/** Here the second controller is part of the loop, so that a sine makes other frequencies too. */
it('draws bands of a truly lifted loop as they are judged: mark and measure agree', async () => {
  const { plots, requirements } = await drawn(
    axis(
      [
        '{ name: B1, measure: largest_sensitivity, at: output, to_frequency: 2 rad/s, at_most: 3 }',
        '{ name: B2, measure: largest_following_gain, at: output, from_frequency: 4 rad/s, to_frequency: 30 rad/s, at_most: 2 }',
        '{ name: B3, measure: largest_loop_gain, at: output, from_frequency: 4 rad/s, to_frequency: 30 rad/s, at_most: 2 }',
      ],
      '\nslow:\n  every: 150 ms\n  signals:\n    aside: { value: -0.5*side, unit: V }',
      'output + aside',
    ),
  );
  expect(plots.gains.map(({ meaning, changes }) => [meaning, changes])).toEqual([
    ['sine', 3],
    ['sine', 3],
    ['sine', 3],
  ]);
  for (const { tightest } of plots.gains) {
    const [{ requirement, value }] = tightest;
    const { result } = requirements.find(({ name }) => name === requirement)!.worst;
    expect(result.kind === 'value' && value / result.value).toBeCloseTo(1, 6);
  }
});

it('says in words why loops opened at several signals at once have no curve', async () => {
  const { plots } = await drawn(
    axis(['{ name: G1, measure: modulus_margin, at: [output, seen], at_least: 0.1 }']),
  );
  expect(plots.loops).toEqual([]);
  expect(plots.undrawn).toHaveLength(1);
  expect(plots.undrawn[0].requirements).toEqual(['G1']);
  expect(plots.undrawn[0].why).toMatch(
    /^The loop opened at output and seen at once has no curve over frequency/,
  );
  expect(plots.gains.map(({ meaning, at }) => [meaning, at])).toEqual([['any_signal', 'output and seen']]);
});

it('says why there is no picture of an unstable closed loop’s sensitivity', async () => {
  const spec = axis(['{ name: G1, measure: sensitivity_peak, at: output, at_most: 2 }']);
  const { plots } = await drawn(spec, undefined, numbers(90, 1));
  expect(plots.undrawn[0].why).toBe(
    'On the worst plant of G1 the loop closed at output is unstable, so that it has no response to draw over frequency.',
  );
});
