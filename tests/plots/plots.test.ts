import { beforeAll, describe, expect, it } from 'vitest';
import { affordable } from '../../src/plots/fineness.js';
import { plotsOf } from '../../src/plots/index.js';
import { htmlReport, type SpecPlots } from '../../src/report/index.js';
import type { Spec } from '../../src/spec/spec.js';
import { type JudgedSpec, judgeSpec } from '../../src/verdict/judge_spec.js';
import { smallSpecOf } from '../small_loop.js';

/**
 * A lag of 1 s and uncertain gain under an integrating controller with a period of 50 ms and a requirement of every kind
 * that is drawn.
 */
const spec: Spec = smallSpecOf({
  parameters: 'gain: { nominal: 1, spread: 40 % }\nsluggish: { nominal: 1 s, spread: 30 % }',
  inputs: 'target: { unit: V }\nload: { unit: V }',
  plant: 'speed: { lag: sluggish, of: drive + load, gain: gain, unit: V }',
  sensors: 'seen: { of: speed, unit: V }',
  controllers:
    "law:\n  every: 50 ms\n  signals:\n    output: { pid: { kp: 1, ki: 1.2 1/s }, of: 'target - seen', unit: V }",
  actuators: 'drive: { of: output, unit: V }',
  scenarios:
    'step:\n  lasts: 12 s\n  inputs: { target: { step: 2 V, at: 1 s } }\nbump:\n  lasts: 8 s\n  inputs: { load: { step: 1 V, at: 1 s } }',
  requirements: [
    '{ name: R1, measure: overshoot, of: speed, to: target, in: step, at_most: 20 % }',
    '{ name: R2, measure: settling_time, of: speed, to: target, in: step, band: 5 %, at_most: 5 s }',
    '{ name: R3, measure: peak_effort, of: drive, in: step, at_most: 4 V }',
    '{ name: R4, measure: peak_deviation, of: speed, to: target, in: bump, at_most: 600 mV }',
    '{ name: R5, measure: corridor_clearance, of: speed, in: step, upper: [[0 s, 3 V], [12 s, 2.5 V]], at_least: 0.1 V }',
    '{ name: R6, measure: phase_margin, at: output, at_least: 40 deg }',
    '{ name: R7, measure: gain_margin, at: output, at_least: 6 dB }',
    '{ name: R8, measure: modulus_margin, at: output, at_least: 0.5 }',
    '{ name: R9, measure: delay_margin, at: output, at_least: 50 ms }',
    '{ name: R10, measure: sensitivity_peak, at: seen, at_most: 2 }',
  ],
});

let judged: JudgedSpec;
let plots: SpecPlots;
beforeAll(async () => {
  judged = await judgeSpec(
    { ...spec, perturbation: { ...spec.perturbation, plants: 20, search: 10 } },
    new Map(),
    { workers: 1 },
  );
  plots = plotsOf(spec, new Map(), judged, undefined, () => 0);
});

const numberOf = (name: string, which: 'nominal' | 'worst' = 'nominal'): number => {
  const { result } = judged.requirements.find((one) => one.name === name)![which];
  return result.kind === 'value' ? result.value : Number.NaN;
};

describe('traces', () => {
  it('are one for each scenario and signal, with every requirement on it', () => {
    expect(
      plots.traces.map(({ scenario, signal, requirements }) => [scenario, signal, requirements]),
    ).toEqual([
      ['step', 'speed', ['R1', 'R2', 'R5']],
      ['step', 'drive', ['R3']],
      ['bump', 'speed', ['R4']],
    ]);
  });

  it('show what the measures say: the peaks of nominal and worst are those of the results', () => {
    const [speed, drive, bump] = plots.traces;
    for (const which of ['nominal', 'worst'] as const) {
      // Looked at 400 times, a smooth peak is met to a few parts in ten thousand.
      expect(Math.max(...speed[which])).toBeCloseTo(2 * (1 + numberOf('R1', which)), 3);
      expect(Math.max(...drive[which].map(Math.abs))).toBeCloseTo(numberOf('R3', which), 3);
      expect(Math.max(...bump[which].map(Math.abs))).toBeCloseTo(numberOf('R4', which), 3);
    }
  });

  it('have nominal and worst inside the band, made of the plants that it says', () => {
    for (const { low, high, nominal, worst, plants, times } of plots.traces) {
      expect(plants).toBeGreaterThan(40);
      times.forEach((_, at) => {
        for (const value of [nominal[at], worst[at]]) {
          expect(value).toBeGreaterThanOrEqual(low[at]);
          expect(value).toBeLessThanOrEqual(high[at]);
        }
      });
    }
  });

  it('show a jump at its time: the target before and after it', () => {
    const [{ times, target }] = plots.traces;
    const at = times.indexOf(1);
    expect([times[at], times[at + 1]]).toEqual([1, 1]);
    expect([target![at], target![at + 1]]).toEqual([0, 2]);
  });

  it('are in the unit of a limit on the signal itself, else in that of the signal', () => {
    expect(plots.traces.map(({ unit }) => unit.text)).toEqual(['V', 'V', 'mV']);
  });

  it('carry each limit as a fence at the level that it means', () => {
    const levels = Object.fromEntries(
      plots.traces
        .flatMap(({ fences }) => fences)
        .map(({ requirement, from, to, forbidden }) => [
          `${requirement} ${forbidden}`,
          [from.time, from.value, to.time, to.value],
        ]),
    );
    expect(levels).toEqual({
      'R1 above': [1, 2.4, 12, 2.4],
      'R2 above': [6, 2.1, 12, 2.1],
      'R2 below': [6, 1.9, 12, 1.9],
      'R3 above': [1, 4, 12, 4],
      'R3 below': [1, -4, 12, -4],
      'R4 above': [1, 0.6, 8, 0.6],
      'R4 below': [1, -0.6, 8, -0.6],
      'R5 above': [0, 3, 12, 2.5],
    });
  });
});

describe('opened loops', () => {
  it('are one for each point of opening', () => {
    expect(plots.loops.map(({ at, requirements }) => [at, requirements])).toEqual([
      ['output', ['R6', 'R7', 'R8', 'R9']],
      ['seen', ['R10']],
    ]);
  });

  it('have brackets where the loop is on the edge, as long as the margins that were judged', () => {
    const [loop] = plots.loops;
    const bracket = (name: string) => loop.margins.find(({ requirement }) => requirement === name)!;
    const curveAt = (name: string) => {
      const { frequency, curve } = bracket(name);
      const at = loop.frequencies.indexOf(frequency);
      return { magnitude: loop[curve].magnitude[at], phase: loop[curve].phase[at] };
    };
    const phase = bracket('R6');
    expect(curveAt('R6').magnitude).toBeCloseTo(1, 9);
    expect(phase.start + Math.PI).toBeCloseTo(numberOf('R6', phase.curve), 9);
    const gain = bracket('R7');
    expect(Math.sin(curveAt('R7').phase)).toBeCloseTo(0, 6);
    expect(1 / gain.start).toBeCloseTo(numberOf('R7', gain.curve), 9);
    const delay = bracket('R9');
    expect((delay.start + Math.PI) / delay.frequency).toBeCloseTo(numberOf('R9', delay.curve), 9);
    expect(phase.text).toMatch(/^worst [\d.]+ deg, headroom [\d.]+ %$/);
  });

  it('come nearest to −1 by the modulus margin, and by one over the sensitivity peak', () => {
    const [modulus, sensitivity] = plots.loops.map((loop) => loop.modulus!);
    const distance = ({ nearest }: typeof modulus): number => Math.hypot(1 + nearest.real, nearest.imaginary);
    expect(distance(modulus)).toBeCloseTo(numberOf('R8', modulus.curve), 6);
    expect(distance(sensitivity)).toBeCloseTo(1 / numberOf('R10', sensitivity.curve), 6);
    expect([modulus.limit, sensitivity.limit]).toEqual([0.5, 0.5]);
  });

  it('start with the phase of an integrator and have no jumps of a turn', () => {
    const { phase } = plots.loops[0].nominal;
    expect(phase[0]).toBeCloseTo(-Math.PI / 2, 1);
    phase.slice(1).forEach((angle, at) => {
      expect(Math.abs(angle - phase[at])).toBeLessThan(Math.PI);
    });
  });
});

describe('planes of headroom', () => {
  it('are drawn for what blocks and for the least headroom, over the two parameters that matter most', () => {
    const order = [...judged.requirements].sort(
      (a, b) =>
        (a.worst.headroom ?? Number.NEGATIVE_INFINITY) - (b.worst.headroom ?? Number.NEGATIVE_INFINITY),
    );
    expect(plots.planes.map(({ requirement }) => requirement)).toEqual(
      order.slice(0, 3).map(({ name }) => name),
    );
    for (const { x, y } of plots.planes)
      expect([x.parameter, y.parameter].sort()).toEqual(['gain', 'sluggish']);
  });

  it('have at the nominal values the nominal headroom', () => {
    for (const { requirement, x, y, headroom } of plots.planes) {
      const { nominal } = judged.requirements.find(({ name }) => name === requirement)!;
      const row = y.values.findIndex((value) => Math.abs(value - y.nominal) < 1e-9);
      const column = x.values.findIndex((value) => Math.abs(value - x.nominal) < 1e-9);
      expect(headroom[row][column]).toBeCloseTo(nominal.headroom!, 6);
    }
  });
});

it('is drawn into the report with every requirement named at its fence or bracket', () => {
  const run = { version: '0', specs: [specRun()] };
  const page = htmlReport(run, { plots: { specs: [plots] } });
  for (const name of ['R1', 'R2', 'R3', 'R4', 'R5'])
    expect(page).toMatch(new RegExp(`fence-name[^>]*>${name}<`));
  for (const name of ['R6', 'R7', 'R8', 'R9', 'R10']) expect(page).toContain(`>${name}: `);
});

function specRun() {
  return {
    ...judged,
    file: 'small.pawl.yaml',
    loop: spec.loop,
    seed: 1,
    confidence: 0.95,
    provenance: undefined,
    coefficients: [],
    scenarios: spec.scenarios.map(({ name, lasts }) => ({ name, lasts })),
    merge: undefined,
    seconds: 0,
  };
}

it('survives plants that cannot be followed: the worst one runs away and the band is what is left', async () => {
  const unstable = smallSpecOf({
    parameters: 'growth: { nominal: -1 1/s, from: -2 1/s, to: 400 1/s }',
    inputs: 'target: { unit: V }',
    plant: 'speed: { integral: growth*speed + drive/(1 s) + target/(1 s), unit: V }',
    sensors: 'seen: { of: speed, unit: V }',
    controllers: 'law:\n  every: 50 ms\n  signals:\n    output: { value: -0.5*seen, unit: V }',
    actuators: 'drive: { of: output, unit: V }',
    scenarios: 'step:\n  lasts: 12 s\n  inputs: { target: { step: 2 V, at: 1 s } }',
    requirements: [
      '{ name: R1, measure: largest_value, of: speed, in: step, at_most: 20 V }',
      '{ name: R2, measure: phase_margin, at: output, at_least: 40 deg }',
    ],
  });
  const found = await judgeSpec(
    { ...unstable, perturbation: { ...unstable.perturbation, plants: 5, search: 5 } },
    new Map(),
    { workers: 1 },
  );
  // A plant that is sure to leave the finite numbers: e^(400·11).
  const run = {
    ...found,
    requirements: found.requirements.map((one) => ({
      ...one,
      worst: { ...one.worst, parameters: one.worst.parameters.map((each) => ({ ...each, value: 400 })) },
    })),
  };
  const { traces } = plotsOf(unstable, new Map(), run);
  const [{ nominal, worst, low, high }] = traces;
  expect(nominal.every(Number.isFinite)).toBe(true);
  expect(worst.at(-1)).toBeNaN();
  expect(high.every((value, at) => value >= low[at])).toBe(true);
  expect(
    htmlReport(
      { version: '0', specs: [{ ...specRun(), ...run }] },
      {
        plots: { specs: [plotsOf(unstable, new Map(), run)] },
      },
    ),
  ).not.toMatch(/NaN/);
});

describe('a spec whose plants take long', () => {
  it('has fewer plants in its bands, and no planes, so that a report is not waited for', async () => {
    let time = 0;
    const slow = plotsOf(spec, new Map(), judged, undefined, () => {
      time += 60;
      return time;
    });
    expect(slow.planes).toEqual([]);
    expect(slow.traces.map(({ plants }) => plants)).toEqual([5 + 3, 5 + 3, 5 + 2]);
    expect(slow.loops).toEqual(plots.loops);
  });
});

describe('affordable', () => {
  it('is the largest count whose runs fit into half a second', () => {
    const clock = (each: number) => {
      let time = 0;
      return () => {
        time += each;
        return time;
      };
    };
    const counts = [81, 49, 25];
    expect(affordable(counts, () => {}, clock(1))).toBe(81);
    expect(affordable(counts, () => {}, clock(8))).toBe(49);
    expect(affordable(counts, () => {}, clock(20))).toBe(25);
    expect(affordable(counts, () => {}, clock(21))).toBeUndefined();
  });
});
