import { describe, expect, it } from 'vitest';
import { PlantEvaluator } from '../../src/measure/evaluate_plant.js';
import { specOf } from '../loop/spec_of.js';
import { traceOf } from '../loop/trace_of.js';
import { publishedCase } from '../published.js';
import { measureSmall, type SmallLoop } from '../small_loop.js';

/** A controller that does nothing but cut the time into steps of this length. */
function stepping(every: string, signal: string): Pick<SmallLoop, 'sensors' | 'controllers'> {
  return {
    sensors: `seen: { of: ${signal} }`,
    controllers: `clock:\n  every: ${every}\n  signals:\n    last: { value: seen }`,
  };
}

describe('a nonlinear plant that is slow where it starts and fast later', () => {
  // H. H. Robertson, 'The solution of a set of reaction rate equations', 1966: rates from 0.04/s to thousands a second. At
  // rest, before the first concentration steps to 1, nothing but 0.04/s shows.
  const { expect: published } = publishedCase('L06');
  const kinetics = (every: string): SmallLoop => ({
    inputs: 'u: {}',
    plant: [
      'y1: { value: moved + u }',
      'moved: { integral: (-0.04 1/s)*y1 + (1e4 1/s)*y2*y3 }',
      'y2: { integral: (0.04 1/s)*y1 - (1e4 1/s)*y2*y3 - (3e7 1/s)*y2*y2 }',
      'y3: { integral: (3e7 1/s)*y2*y2 }',
    ].join('\n'),
    ...stepping(every, 'y1'),
    scenarios: 'run: { lasts: 41 s, inputs: { u: { step: 1, at: 0 s } } }',
    requirements: ['y1', 'y2', 'y3'].map(
      (name) =>
        `{ name: ${name}, in: run, measure: largest_value, of: ${name}, from: 40 s, until: 40.000001 s, at_most: 2 }`,
    ),
  });

  it.each([
    ['10 ms', 0, 1e-6],
    ['10 ms', 3, 1e-7],
    ['1 s', 0, 1e-4],
    ['1 s', 2, 1e-5],
  ])('has the published concentrations with steps of %s halved %d times', (every, halvings, within) => {
    const results = measureSmall(kinetics(every), { halvings });
    for (const [i, name] of ['y1', 'y2', 'y3'].entries()) {
      const { value } = published[name] as { value: number };
      expect(Math.abs((results[i] as { value: number }).value / value - 1), name).toBeLessThan(within);
    }
  });

  it('swings over the whole stiff limit cycle of van der Pol', () => {
    // Large μ: x from 2 down to 1 in μ·(3 − 2·ln 2)/2, period near μ·(3 − 2·ln 2) + 7.014·μ^(−1/3) (A. A. Dorodnitsyn, 'Asymptotic
    // solution of van der Pol's equation', 1947); what is left is of the order ln μ/μ.
    const mu = 300;
    const { x } = traceOf(
      `
inputs: { u: {} }
plant:
  x: { integral: (1 1/s)*v, start: 2 }
  v: { integral: (1 1/s)*(${mu}*(1 - x*x)*v - x + u), start: 0 }
scenarios: { run: { lasts: 1200 s, start: { x: 2, v: 0 }, inputs: { u: { step: 0, at: 0 s } } } }`,
      ['x'],
    );
    const upward = x.flatMap(({ time, value }, i) =>
      i > 0 && x[i - 1].value < 0 && value >= 0 ? [time] : [],
    );
    const period = mu * (3 - 2 * Math.log(2)) + 7.014 / Math.cbrt(mu);
    expect(upward.length).toBeGreaterThanOrEqual(2);
    expect(Math.abs((upward[1] - upward[0]) / period - 1)).toBeLessThan(0.01);
    expect(Math.max(...x.map(({ value }) => value))).toBeCloseTo(2, 2);
  });

  it('runs away as its closed form, and ends where it leaves the numbers', () => {
    // x' = x² from x₀ is x₀/(1 − x₀·t), gone at 1/x₀.
    const runaway = (lasts: string): SmallLoop => ({
      inputs: 'u: {}',
      plant: 'x: { integral: (1 1/s)*(x*x + 0*u), start: 0.1 }',
      scenarios: `run: { lasts: ${lasts}, start: { x: 0.1 }, inputs: { u: { step: 1, at: 0 s } } }`,
      requirements: ['{ name: top, in: run, measure: largest_value, of: x, at_most: 2 }'],
    });
    const [before] = measureSmall(runaway('9.9 s'), { halvings: 4 });
    expect((before as { value: number }).value).toBeCloseTo(10, 2);
    const [after] = measureSmall(runaway('11 s'));
    expect(after).toMatchObject({ kind: 'overflow' });
  });

  it('says so where it is too fast to be followed', () => {
    // A swing without damping whose frequency grows to 1e7 rad/s while nothing else happens.
    const [result] = measureSmall(
      {
        inputs: 'u: {}',
        plant: 'w: { integral: (1e7 1/s^2)*u, unit: 1/s }\nx: { integral: w*y }\ny: { integral: -w*x }',
        scenarios: 'run: { lasts: 1 s, start: { x: 1 }, inputs: { u: { step: 1, at: 0 s } } }',
        requirements: ['{ name: top, in: run, measure: largest_value, of: x, at_most: 2 }'],
      },
      { halvings: 3 },
    );
    expect(result).toMatchObject({
      kind: 'unformed',
      why: expect.stringMatching(
        /the plant is so fast that one step of .* s was cut into more than 65536 parts/,
      ),
    });
  });

  it('passes a slope that is not finite, as of a tank that runs empty', () => {
    // Torricelli 1644: √h falls straight, h = (1 − t/2)² with this outlet, and empty it stays.
    const { h } = traceOf(
      `
inputs: { u: {} }
plant: { h: { integral: "-(1 1/s)*sqrt(max(h, 0)) + (1 1/s)*u", start: 1 } }
scenarios: { run: { lasts: 1.9 s, start: { h: 1 }, inputs: { u: { step: 0, at: 0 s } } } }`,
      ['h'],
      3,
    );
    for (const { time, value } of h) expect(value).toBeCloseTo((1 - time / 2) ** 2, 6);
  });

  it('gives the same to the bit whatever other plants ran before it', () => {
    const spec = specOf(`
parameters: { k: { nominal: 3e7, from: 1e6, to: 1e9 } }
inputs: { u: {} }
plant:
  y1: { integral: (-0.04 1/s)*(y1 + u) + (1e4 1/s)*y2*y3 }
  y2: { integral: (0.04 1/s)*(y1 + u) - (1e4 1/s)*y2*y3 - k*(1 1/s)*y2*y2 }
  y3: { integral: k*(1 1/s)*y2*y2 }
scenarios: { run: { lasts: 5 s, inputs: { u: { step: 1, at: 0 s } } } }
requirements: [{ name: top, measure: rms_effort, of: y2, in: run, at_most: 1 }]`);
    const evaluate = (evaluator: PlantEvaluator, k: number) => evaluator.evaluate(Float64Array.of(k), 0)[0];
    const used = new PlantEvaluator(spec, new Map());
    for (const k of [1e9, 1e6, 3e7]) {
      expect(evaluate(used, k)).toEqual(evaluate(new PlantEvaluator(spec, new Map()), k));
    }
  });
});
