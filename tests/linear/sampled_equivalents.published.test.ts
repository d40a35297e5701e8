import { describe, expect, it } from 'vitest';
import { continuousImage } from '../../src/linear/bilinear.js';
import { Linearisation } from '../../src/linear/linearise.js';
import { openedLoop } from '../../src/linear/opened_loop.js';
import { pointOfRest } from '../../src/linear/point_of_rest.js';
import { prepareResponse, responseAt } from '../../src/linear/response.js';
import type { StateEquations } from '../../src/linear/state_equations.js';
import { transmissionZeros } from '../../src/linear/transmission_zeros.js';
import { expandLoop } from '../../src/loop/expand.js';
import { scheduleOf } from '../../src/loop/schedule.js';
import { specOf } from '../loop/spec_of.js';
import { expectPublished, publishedCase } from '../published.js';
import { holdEquivalent } from './hold_equivalent.js';
import { loopOf, ratioOf } from './loops.js';

interface Written {
  plant: string;
  period: number;
  delay?: number;
  /** The law's signal `back`, of which minus the reading `seen` is a part. */
  law?: string;
  at: string;
}

/** The opened loop of a spec as margins are read from it. */
function opened({ plant, period, delay = 0, law = 'value: u - seen', at }: Written): StateEquations {
  const spec = specOf(`
inputs: { u: {} }
plant:
${plant}
sensors: { seen: { of: y } }
controllers:
  law: { every: ${period} s, delay: ${delay} s, signals: { back: { ${law} } } }
actuators: { held: { of: back } }
scenarios: { jump: { lasts: 1 s, inputs: { u: { step: 1, at: 0 s } } } }
requirements: [{ name: R, measure: gain_margin, at: ${at}, at_least: 1.1 }]
`);
  const loop = expandLoop(spec, new Map());
  const none = new Float64Array(0);
  const rest = pointOfRest(new Linearisation(loop), none, loop.inputRest);
  const point = rest.kind === 'rest' ? rest.point : { state: loop.states.map(() => 0), memory: [], held: [] };
  const linearisation = new Linearisation(expandLoop(spec, new Map(), { openAt: [at] }));
  return openedLoop(linearisation, scheduleOf(loop, none), {
    parameter: none,
    input: loop.inputRest,
    injected: [0],
    ...point,
  });
}

/** A plant in the state equations of a published case. */
function plantOf(id: string): string {
  const { state_matrix: a, input_matrix: b, output_matrix: c } = publishedCase(id).given;
  const sum = (row: number[], names: string[], unit: string): string =>
    row.map((x, i) => `(${x}${unit})*${names[i]}`).join(' + ');
  const states = a.map((_: number[], i: number) => `x${i}`);
  return [
    ...a.map(
      (row: number[], i: number) =>
        `  x${i}: { integral: "${sum(row, states, ' 1/s')} + (${b[i][0]} 1/s)*held" }`,
    ),
    `  y: { value: "${sum(c[0], states, '')}" }`,
  ].join('\n');
}

// Opened behind the law, which gives back −y, the loop is the plant as its sampled inputs and outputs see it: held, delayed,
// and exact at the instants. Each published case names its own source: reference/published/README.md.
describe('a plant behind a zero-order hold, as margins see it', () => {
  for (const id of ['B01', 'B02', 'B03', 'B04', 'B05']) {
    it(`${id}: ${publishedCase(id).title}, with delays of whole periods and parts of them`, () => {
      const { sampling_period_s: period, input_delays_s: delays } = publishedCase(id).given;
      ['no_delay', 'delayed', 'delayed_2'].forEach((suffix, k) => {
        const loop = opened({ plant: plantOf(id), period, delay: delays[k], at: 'back' });
        const { numerator, denominator } = ratioOf(loop);
        expectPublished(id, `numerator_${suffix}`, [...numerator]);
        expectPublished(id, `denominator_${suffix}`, [...denominator]);
      });
    });
  }

  it(`B06: ${publishedCase('B06').title}`, () => {
    const { numerator, denominator } = ratioOf(opened({ plant: plantOf('B06'), period: 1, at: 'back' }));
    expectPublished('B06', 'leading_numerator', numerator[1]);
    expectPublished('B06', 'trailing_numerator', numerator[2]);
    // The other pole is 1: what is left of the product of both is this one.
    expectPublished('B06', 'pole', denominator[2]);
  });

  it(`B07: ${publishedCase('B07').title}`, () => {
    const period = publishedCase('B07').given.sampling_period_s;
    for (const n of [2, 3, 4]) {
      const chain = Array.from({ length: n }, (_, i) => {
        const from = i === n - 1 ? 'held' : `x${i + 1}`;
        return `  x${i}: { integral: "(1 1/s)*${from}" }`;
      });
      const sampled = opened({ plant: [...chain, '  y: { value: x0 }'].join('\n'), period, at: 'back' });
      const zeros = transmissionZeros(sampled, 1).map(({ real }) => real + 1);
      expectPublished(
        'B07',
        `zeros_n${n}`,
        zeros.sort((a, b) => a - b),
      );
      if (n < 4) continue;
      const { numerator } = ratioOf(sampled);
      const pattern = numerator
        .slice(1)
        .map((coefficient) => Math.round((coefficient / numerator[1]) * 1e6) / 1e6);
      expectPublished('B07', 'numerator_pattern_n4', pattern);
    }
  });

  it('is what other tests build their loops of', () => {
    const plant = '  x: { integral: "(3 1/s)*held - (2 1/s)*x" }\n  y: { value: x }';
    for (const delay of [0, 0.03, 0.24]) {
      const [written, built] = [
        opened({ plant, period: 0.1, delay, at: 'back' }),
        holdEquivalent(loopOf([3], [1, 2]), 0.1, delay),
      ].map(ratioOf);
      written.numerator.forEach((x, i) => {
        expect(x).toBeCloseTo(built.numerator[i], 14);
      });
      expect(written.denominator.length).toBe(built.denominator.length);
    }
  });
});

describe('the trapezoid rule in a controller', () => {
  it(`B08: ${publishedCase('B08').title}`, () => {
    const { given } = publishedCase('B08');
    const lag = `time_constant: ${given.lag_time_constant_s} s, sum_by: trapezoid`;
    const integral = given.gain / given.integral_time_s;
    const cases: [string, string][] = [
      ['lag', `low_pass: { ${lag} }, of: u - seen`],
      ['controller', `pid: { kp: ${given.gain}, ki: ${integral} 1/s, sum_by: trapezoid }, of: u - seen`],
      [
        'pre_warped',
        `low_pass: { ${lag}, exact_at: ${given.pre_warp_frequency_rad_per_s} rad/s }, of: u - seen`,
      ],
    ];
    for (const [name, law] of cases) {
      const period: number = given.sampling_period_s;
      const loop = opened({ plant: '  y: { value: held }', period, law, at: 'held' });
      const { numerator, denominator } = ratioOf(loop);
      // What is held is read at the next instant: the law is behind a delay, and each memory that is not needed is a factor z.
      const [above, below] = [numerator, denominator].map((x) => withoutZeros([...x]));
      expectPublished('B08', `${name}_numerator`, above);
      expectPublished('B08', `${name}_denominator`, below);
    }
  });
});

/** The coefficients from the first to the last that is more than rounding. */
function withoutZeros(coefficients: number[]): number[] {
  const counts = (x: number): boolean => Math.abs(x) > 1e-12;
  return coefficients.slice(coefficients.findIndex(counts), coefficients.findLastIndex(counts) + 1);
}

describe('the continuous image of a sampled system', () => {
  it('has its response at (2/T)·tan(ωT/2) (Tustin, 1947)', () => {
    const period = 0.2;
    const sampled = loopOf([1, 0.4, 0.1], [1, -0.7, 0.5], period);
    const image = prepareResponse(continuousImage(sampled));
    for (const frequency of [0.01, 1, 5, 12]) {
      const own = responseAt(sampled, frequency);
      const found = image((2 / period) * Math.tan((frequency * period) / 2));
      expect(found.real).toBeCloseTo(own.real, 12);
      expect(found.imaginary).toBeCloseTo(own.imaginary, 12);
    }
  });

  it('is that of a sampled system only', () => {
    expect(() => continuousImage(loopOf([1], [1, 1]))).toThrow(/no continuous image/);
  });
});
