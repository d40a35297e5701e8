import fc from 'fast-check';
import { describe, expect, it } from 'vitest';
import { Derivative } from '../../src/loop/derivative.js';
import { Evaluation } from '../../src/loop/evaluate.js';
import { Graph, type Node, type OperationName } from '../../src/loop/graph.js';

type Shape = { name: OperationName; of: Shape[] } | { leaf: number } | { value: number };

const unary: OperationName[] = ['negate', 'sin', 'cos', 'atan', 'tanh', 'sinh', 'cosh', 'exp', 'abs'];
const binary: OperationName[] = ['add', 'subtract', 'multiply', 'hypot', 'min', 'max'];

/** Random smooth expressions of two states, shallow enough for their values to stay of ordinary size. */
const shapes: fc.Arbitrary<Shape> = fc.letrec<{ shape: Shape }>((tie) => ({
  shape: fc.oneof(
    { maxDepth: 3 },
    fc.record({ leaf: fc.constantFrom(0, 1) }),
    fc.record({ value: fc.double({ min: -2, max: 2, noNaN: true }) }),
    fc.record({ name: fc.constantFrom(...unary), of: fc.tuple(tie('shape')) }) as fc.Arbitrary<Shape>,
    fc.record({
      name: fc.constantFrom(...binary),
      of: fc.tuple(tie('shape'), tie('shape')),
    }) as fc.Arbitrary<Shape>,
  ),
})).shape;

function build(graph: Graph, shape: Shape): Node {
  if ('leaf' in shape) return graph.leaf('state', shape.leaf);
  if ('value' in shape) return graph.number(shape.value);
  return graph.apply(shape.name, ...shape.of.map((of) => build(graph, of)));
}

describe('exact derivatives', () => {
  it('equal a central difference of the expression, where that converges', () => {
    let compared = 0;
    fc.assert(
      fc.property(shapes, fc.double({ min: -1.5, max: 1.5, noNaN: true }), (shape, x) => {
        const graph = new Graph();
        const root = build(graph, shape);
        const slope = new Derivative(graph).of(root, graph.leaf('state', 0));
        const valueAt = (x0: number): number => new Evaluation({ state: [x0, 0.7] }).of(root);
        const difference = (h: number): number => (valueAt(x + h) - valueAt(x - h)) / (2 * h);
        const [coarse, fine] = [difference(2e-4), difference(1e-4)];
        // At a kink, or where the terms cancel, the difference itself does not settle: nothing to compare with.
        const kink = Math.abs(valueAt(x + 1e-4) + valueAt(x - 1e-4) - 2 * valueAt(x)) / 1e-4;
        fc.pre(Number.isFinite(fine) && Math.abs(coarse - fine) < 1e-5 * (1 + Math.abs(fine)));
        fc.pre(kink < 1e-2 * (1 + Math.abs(fine)));
        const exact = new Evaluation({ state: [x, 0.7] }).of(slope);
        // Richardson's extrapolation of the two; what is left is the rounding of the difference over h.
        const reference = fine + (fine - coarse) / 3;
        expect(Math.abs(exact - reference)).toBeLessThan(
          1e-6 * (1 + Math.abs(reference) + Math.abs(valueAt(x))),
        );
        compared++;
      }),
      { numRuns: 500, seed: 4 },
    );
    expect(compared).toBeGreaterThanOrEqual(500);
  });

  const graph = new Graph();
  const x = graph.leaf('state', 0);
  const slopeAt = (node: Node, value: number): number =>
    new Evaluation({ state: [value] }).of(new Derivative(graph).of(node, x));

  // Table of derivatives, e.g. I. N. Bronshtein et al., 'Handbook of Mathematics', 2015, from memory.
  const table: [OperationName, (v: number) => number][] = [
    ['sqrt', (v) => 0.5 / Math.sqrt(v)],
    ['ln', (v) => 1 / v],
    ['tan', (v) => 1 / Math.cos(v) ** 2],
    ['asin', (v) => 1 / Math.sqrt(1 - v * v)],
    ['acos', (v) => -1 / Math.sqrt(1 - v * v)],
  ];
  for (const [name, expected] of table) {
    it(`of ${name} are the handbook's`, () => {
      expect(slopeAt(graph.apply(name, x), 0.37)).toBeCloseTo(expected(0.37), 14);
    });
  }

  it('of a power hold for a base and for an exponent', () => {
    expect(slopeAt(graph.apply('power', x, graph.number(3)), 1.7)).toBeCloseTo(3 * 1.7 ** 2, 13);
    expect(slopeAt(graph.apply('power', graph.number(2), x), 1.7)).toBeCloseTo(2 ** 1.7 * Math.log(2), 13);
  });

  it('take quanta and number formats as gain one, a range as one inside and zero outside', () => {
    const limit = graph.apply('limit', x, graph.number(-1), graph.number(1));
    expect(slopeAt(limit, 0.5)).toBe(1);
    expect(slopeAt(limit, 1.5)).toBe(0);
    expect(slopeAt(graph.apply('quantise', x, graph.number(0.25)), 0.4)).toBe(1);
    expect(slopeAt(graph.apply('single', x), 0.4)).toBe(1);
  });
});
