import fc from 'fast-check';
import { describe, expect, it } from 'vitest';
import { Evaluation } from '../../../src/loop/evaluate.js';
import { counting } from '../../../src/loop/fixed_point.js';
import { Graph, type Node } from '../../../src/loop/graph.js';
import type { Interval } from '../../../src/perturb/proof/interval.js';
import { SlopeField } from '../../../src/perturb/proof/slope.js';
import { SlopeEvaluation, Unprovable } from '../../../src/perturb/proof/slope_evaluation.js';

type Build = (graph: Graph, x: Node, y: Node) => Node;

const [step, nearest, low, size] = [2 ** -15, 0, -1, 2];
const numbers = (g: Graph, ...of: number[]): Node[] => of.map((one) => g.number(one));
const fitted = (g: Graph, name: 'fit', overflow: number, x: Node): Node =>
  g.apply(name, x, ...numbers(g, step, nearest, low, size, overflow));
const quotient = (g: Graph, overflow: number, x: Node, y: Node): Node =>
  g.apply('fit_quotient', x, y, ...numbers(g, step, low, size, overflow));
const fittedSum = (g: Graph, overflow: number, ...terms: Node[]): Node =>
  g.apply('fit_sum', ...numbers(g, step, nearest, low, size, overflow, step, low, size), ...terms);

const expressions: [string, Build][] = [
  [
    'x·y − y·x, which is nothing',
    (g, x, y) => g.apply('subtract', g.apply('multiply', x, y), g.apply('multiply', y, x)),
  ],
  [
    '(x + y)/(x·x + 2)',
    (g, x, y) =>
      g.apply('divide', g.apply('add', x, y), g.apply('add', g.apply('multiply', x, x), g.number(2))),
  ],
  ['exp(x)·tanh(y)', (g, x, y) => g.apply('multiply', g.apply('exp', x), g.apply('tanh', y))],
  ['sin(x)·cos(y)', (g, x, y) => g.apply('multiply', g.apply('sin', x), g.apply('cos', y))],
  [
    'sqrt(x + 5) − ln(y + 5)',
    (g, x, y) =>
      g.apply(
        'subtract',
        g.apply('sqrt', g.apply('add', x, g.number(5))),
        g.apply('ln', g.apply('add', y, g.number(5))),
      ),
  ],
  [
    '(x − 7)^−3·y^2',
    (g, x, y) =>
      g.apply(
        'multiply',
        g.apply('power', g.apply('subtract', x, g.number(7)), g.number(-3)),
        g.apply('power', y, g.number(2)),
      ),
  ],
  [
    '|x + 9| limited below 100',
    (g, x) => g.apply('limit', g.apply('abs', g.apply('add', x, g.number(9))), g.number(-1), g.number(100)),
  ],
  ['x·y + x rounded once', (g, x, y) => g.apply('fused_multiply_add', x, y, x)],
  ['x in a fixed-point format, times y', (g, x, y) => g.apply('multiply', fitted(g, 'fit', 0, x), y)],
  ['x·y + y·y in a fixed-point format', (g, x, y) => fittedSum(g, 0, x, y, y, y)],
  ['x/(y + 9) in a fixed-point format', (g, x, y) => quotient(g, 0, x, g.apply('add', y, g.number(9)))],
  ['a count of what overflows, which is no part of the equations', (g, x, y) => fittedSum(g, counting, x, y)],
  [
    '1 − tanh²',
    (g, x, y) =>
      g.apply('subtract', g.number(1), g.apply('multiply', g.apply('tanh', x), g.apply('tanh', y))),
  ],
];
const bounds = fc
  .tuple(fc.double({ min: -3, max: 3, noNaN: true }), fc.double({ min: 0, max: 1, noNaN: true }))
  .map(([low, width]): Interval => [low, low + width]);
const share = fc.double({ min: 0, max: 1, noNaN: true });
const at = ([low, high]: Interval, part: number): number => Math.min(high, low + part * (high - low));

function over(build: Build, box: Interval[]) {
  const graph = new Graph();
  const node = build(graph, graph.leaf('parameter', 0), graph.leaf('parameter', 1));
  const field = new SlopeField(box);
  const slope = new SlopeEvaluation(field, (_, index) => field.variable(index)).of(node);
  const value = (x: number, y: number): number => new Evaluation({ parameter: [x, y] }, 'off').of(node);
  return { slope, value };
}

// Krawczyk and Neumaier 1985: both forms of bounds hold every value; plain evaluation is off by some roundings.
describe('quantities over a box', () => {
  it.each(expressions)('%s: the range and the slopes hold every plant of the box', (_, build) => {
    fc.assert(
      fc.property(bounds, bounds, share, share, (a, b, s, t) => {
        const { slope, value } = over(build, [a, b]);
        const [x, y] = [at(a, s), at(b, t)];
        const exact = value(x, y);
        const off = 1e-13 * (1 + Math.abs(exact));
        expect(slope.range[0]).toBeLessThanOrEqual(exact + off);
        expect(slope.range[1]).toBeGreaterThanOrEqual(exact - off);
        const [cx, cy] = [a, b].map(([low, high]) => low + (high - low) / 2);
        const centre = value(cx, cy);
        const moves = [x - cx, y - cy];
        const ends = slope.slopes.map(([low, high], i) => [low * moves[i], high * moves[i]]);
        const least = centre + ends.reduce((sum, pair) => sum + Math.min(...pair), 0);
        const most = centre + ends.reduce((sum, pair) => sum + Math.max(...pair), 0);
        expect(least).toBeLessThanOrEqual(exact + off);
        expect(most).toBeGreaterThanOrEqual(exact - off);
      }),
      { seed: 72, numRuns: 300 },
    );
  });

  it('what is gained: a difference of like quantities nearly cancels', () => {
    const { slope } = over(expressions[0][1], [
      [1, 1.01],
      [2, 2.01],
    ]);
    expect(slope.range[1] - slope.range[0]).toBeLessThan(1e-3);
  });

  it('shrinks with the square of the box', () => {
    const width = (size: number): number => {
      const { slope } = over(expressions[1][1], [
        [1, 1 + size],
        [1, 1 + size],
      ]);
      // What is wider than the spread of the true values.
      return slope.range[1] - slope.range[0] - (0.11 + 0.33) * size;
    };
    expect(width(0.02)).toBeLessThan(0.4 * width(0.04) + 1e-4);
  });

  it('settles a comparison of equals, and a product with nothing whatever the other factor', () => {
    const graph = new Graph();
    const [x, y] = [graph.leaf('parameter', 0), graph.leaf('parameter', 1)];
    const field = new SlopeField([
      [0, 1],
      [1, 2],
    ]);
    const evaluation = new SlopeEvaluation(field, (_, index) => field.variable(index));
    expect(evaluation.of(graph.apply('less', y, x)).range).toEqual([0, 0]);
    expect(evaluation.of(graph.apply('less_or_equal', x, y)).range).toEqual([1, 1]);
    expect(evaluation.of(graph.apply('equal', x, graph.number(3))).range).toEqual([0, 0]);
    expect(evaluation.of(graph.apply('unequal', y, graph.number(3))).range).toEqual([1, 1]);
    expect(() => evaluation.of(graph.apply('equal', x, y))).toThrow('both ways');
    const either = graph.apply('less', x, graph.apply('multiply', y, graph.number(0.5)));
    expect(() => evaluation.of(either)).toThrow(Unprovable);
    const never = graph.apply('less', y, x);
    expect(evaluation.of(graph.apply('multiply', either, never)).range).toEqual([0, 0]);
  });

  it('does not guess where a choice goes both ways', () => {
    const build: Build = (g, x, y) => g.apply('choose', g.apply('less', x, y), x, y);
    expect(() =>
      over(build, [
        [0, 2],
        [1, 3],
      ]),
    ).toThrow(Unprovable);
    expect(
      over(build, [
        [0, 1],
        [2, 3],
      ]).slope.range,
    ).toEqual([0, 1]);
    expect(() =>
      over(
        (g, x) => g.apply('floor', x),
        [
          [0, 1],
          [0, 1],
        ],
      ),
    ).toThrow("'floor'");
  });
});
