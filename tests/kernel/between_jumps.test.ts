import fc from 'fast-check';
import { describe, expect, it } from 'vitest';
import { AffineForm } from '../../src/loop/affine.js';
import { Graph } from '../../src/loop/graph.js';
import type { Mode } from '../../src/loop/loop.js';
import { type TracePoint, traceOf } from '../loop/trace_of.js';

/** Plants that are linear between two jumps move there by the matrix exponential: without a halving they are exact. */

function expectTrace(trace: TracePoint[], expected: (t: number) => number, digits = 10): void {
  expect(trace.length).toBeGreaterThan(10);
  for (const { time, value } of trace) expect(value, `at ${time} s`).toBeCloseTo(expected(time), digits);
}

describe('a plant that is linear between its jumps', () => {
  it('with a relay swings exactly as the handbook has it', () => {
    // T x' = ±1 − x, turned at ∓b: each half takes T·ln((1 + b)/(1 − b)) (Ya. Z. Tsypkin, 'Relay Control Systems', 1984).
    fc.assert(
      fc.property(
        fc.double({ min: 0.1, max: 0.8, noNaN: true }),
        fc.double({ min: 0.2, max: 3, noNaN: true }),
        (b, T) => {
          const { x } = traceOf(
            `
inputs: { u: {} }
plant:
  relay: { hysteresis: { on_above: ${b}, off_below: -${b}, on: 1, off: -1 }, of: u - x }
  x: { lag: ${T} s, of: relay }
scenarios: { run: { start: zero, lasts: ${8 * T} s, inputs: { u: { step: 0, at: 0 s } } } }`,
            ['x'],
          );
          const half = T * Math.log((1 + b) / (1 - b));
          const first = -T * Math.log(1 - b);
          expectTrace(x, (t) => {
            if (t < first) return Math.exp(-t / T) - 1;
            const turns = Math.floor((t - first) / half);
            const since = t - first - turns * half;
            return (turns % 2 === 0 ? 1 : -1) * (1 - (1 + b) * Math.exp(-since / T));
          });
        },
      ),
      { numRuns: 10 },
    );
  });

  it('takes what only held values set through any function of them', () => {
    // Two coils that pull against each other, of unlike strength, each on one side of the command: T x' = k·|c|^1.5 − x.
    const { x } = traceOf(
      `
inputs: { u: {} }
plant:
  left: { value: "2*max(coil, 0)^1.5" }
  right: { value: "3*max(-coil, 0)^1.5" }
  x: { lag: 0.7 s, of: left - right }
sensors: { seen: { of: x } }
controllers: { axis: { every: 0.5 s, signals: { push: { value: u + 0*seen } } } }
actuators: { coil: { of: push } }
scenarios: { run: { lasts: 4 s, inputs: { u: [{ step: 0.25, at: 1 s }, { step: -0.5, at: 2 s }] } } }`,
      ['x'],
    );
    const fall = (t: number): number => Math.exp(-t / 0.7);
    const atTwo = 0.25 * (1 - fall(1));
    expectTrace(x, (t) => {
      if (t < 1) return 0;
      return t < 2 ? 0.25 * (1 - fall(t - 1)) : -0.375 + (atTwo + 0.375) * fall(t - 2);
    });
  });

  it('with a switched output has the ripple of the handbook', () => {
    // A lag T behind a switch of period P and share d settles between r/(…): its top is (1 − e^{−dP/T})/(1 − e^{−P/T}).
    const [T, P, d] = [0.02, 0.01, 0.3];
    const { x } = traceOf(
      `
inputs: { u: {} }
plant: { x: { lag: ${T} s, of: bridge } }
sensors: { seen: { of: x } }
controllers: { axis: { every: ${P} s, signals: { share: { value: u + 0*seen } } } }
actuators: { bridge: { of: share, range: [0, 1], pwm: ripple } }
scenarios: { run: { lasts: 1 s, inputs: { u: { step: ${d}, at: 0 s } } } }`,
      ['x'],
    );
    const late = x.filter(({ time }) => time > 0.9).map(({ value }) => value);
    const top = (1 - Math.exp((-d * P) / T)) / (1 - Math.exp(-P / T));
    expect(Math.max(...late)).toBeCloseTo(top, 11);
    expect(Math.min(...late)).toBeCloseTo(top * Math.exp((-(1 - d) * P) / T), 11);
  });

  it('lets one jump bring about another at the same moment', () => {
    // The second relay switches on the first one, and the sum jumps once: no piece of the trace has the one without the other.
    const { both } = traceOf(
      `
inputs: { u: {} }
plant:
  x: { integral: (1 1/s)*u }
  first: { hysteresis: { on_above: 0.35, off_below: -1, on: 1, off: 0 }, of: x }
  second: { hysteresis: { on_above: 0.5, off_below: -1, on: 1, off: 0 }, of: first }
  both: { value: first + second }
scenarios: { run: { lasts: 1 s, inputs: { u: { step: 1, at: 0 s } } } }`,
      ['both'],
    );
    expect(new Set(both.map(({ value }) => value))).toEqual(new Set([0, 2]));
  });
});

describe('the form of rates as sums', () => {
  const graph = new Graph();
  const [x, y] = [0, 1].map((index) => graph.leaf('state', index));
  const [held, input] = [graph.leaf('held', 0), graph.leaf('input', 0)];
  const [relay, drift] = [0, 1].map((index) => graph.leaf('mode', index));
  const zero = graph.number(0);
  const modes: Mode[] = [
    { name: 'relay', next: zero, start: 0, taken: 'at_jumps' },
    { name: 'drift', next: zero, start: 0, taken: 'after_steps' },
  ];

  it.each([
    ['a product of states', graph.apply('multiply', x, y)],
    ['a state through a function', graph.apply('tanh', x)],
    ['a state against a bound', graph.apply('limit', x, graph.number(-1), graph.number(1))],
    ['a choice by a state', graph.apply('choose', graph.apply('less', x, zero), x, y)],
    ['a state times what is held', graph.apply('multiply', held, x)],
    ['a state times what drifts', graph.apply('multiply', drift, x)],
  ])('is none for %s', (_name, rate) => {
    expect(AffineForm.of([rate], modes)).toBeUndefined();
  });

  it('names what stays and what switches, and gives each its factor', () => {
    const squared = graph.apply('multiply', held, held);
    const gain = graph.apply('choose', relay, graph.number(3), graph.number(5));
    const forward = graph.apply('less', zero, input);
    const rate = graph.apply(
      'add',
      graph.apply('choose', forward, graph.apply('multiply', gain, x), graph.apply('negate', y)),
      graph.apply('subtract', graph.apply('divide', squared, graph.number(4)), graph.number(7)),
    );
    const form = AffineForm.of([rate], modes)!;
    expect(form.switches).toEqual([forward, gain]);
    const termsWith = (isForward: number): [unknown, number][] => {
      const terms: [unknown, number][] = [];
      form.terms(
        (node) => (node === forward ? isForward : node === gain ? 3 : (node as { value: number }).value),
        (_, of, factor) => terms.push([of, factor]),
      );
      return terms;
    };
    const stays = form.sources[0];
    expect(termsWith(1)).toEqual([
      [x, 3],
      [stays, 1],
    ]);
    expect(termsWith(0)).toEqual([
      [y, -1],
      [stays, 1],
    ]);
  });
});
