import fc from 'fast-check';
import { describe, expect, it } from 'vitest';
import { helpers, statements } from '../../src/kernel/source.js';
import { Evaluation } from '../../src/loop/evaluate.js';
import { Graph, type Node, type OperationName, operations } from '../../src/loop/graph.js';

const arities = Object.entries(operations).map(([name, operate]): [OperationName, number] => [
  name as OperationName,
  name === 'hypot'
    ? 2
    : Math.max(1, operate.length || (name === 'min' || name === 'max' || name === 'atan2' ? 2 : 1)),
]);

const numbers = fc.oneof(
  fc.double({ min: -3, max: 3, noNaN: true }),
  fc.constantFrom(0, -0, 1, -1, 0.5, Number.MAX_VALUE, Number.MIN_VALUE, Number.POSITIVE_INFINITY),
);

/** Numbers on a grid of 2^-14 in Q2.14, with each rounding, and each overflow rule with and without counting. */
const format = fc
  .tuple(fc.integer({ min: 0, max: 3 }), fc.integer({ min: 0, max: 3 }))
  .map(([rounding, overflow]) => ({ rounding, ends: [-2, 4, overflow] }));
const onGrid = fc.integer({ min: -40_000, max: 40_000 }).map((steps) => steps * 2 ** -14);
const step = 2 ** -14;

/** Arguments for operations which are not defined for any numbers. */
const fitting: Partial<Record<OperationName, fc.Arbitrary<number[]>>> = {
  fit: fc.tuple(onGrid, format).map(([x, { rounding, ends }]) => [x / 8, step, rounding, ...ends]),
  fit_sum: fc
    .tuple(format, fc.array(onGrid, { minLength: 2, maxLength: 2 }), onGrid, onGrid)
    .map(([{ rounding, ends }, first, x, y]) => [step, rounding, ...ends, 2 ** -28, -8, 16, ...first, x, y]),
  fit_quotient: fc.tuple(onGrid, onGrid, format).map(([x, y, { ends }]) => [x, y, step, ...ends]),
};

function compiled(root: Node): (m: Float64Array) => number {
  const { lines, results } = statements([root], ({ index }) => `m[${index}]`, 'v');
  const text = `return (m) => { ${lines.join('\n')} return ${results[0]}; }`;
  return new Function(...Object.keys(helpers), text)(...Object.values(helpers));
}

describe('compiled expressions', () => {
  for (const [name, arity] of arities) {
    it(`of '${name}' equal the evaluated ones, bit for bit`, () => {
      fc.assert(
        fc.property(fitting[name] ?? fc.array(numbers, { minLength: arity, maxLength: arity }), (values) => {
          const graph = new Graph();
          const root = graph.apply(name, ...values.map((_, index) => graph.leaf('state', index)));
          const expected = new Evaluation({ state: values }).of(root);
          expect(compiled(root)(Float64Array.from(values))).toBe(expected);
          expect(graph.apply(name, ...values.map((value) => graph.number(value)))).toEqual(
            expect.objectContaining({ kind: 'number', value: expected }),
          );
        }),
        { numRuns: 100, seed: 7 },
      );
    });
  }

  it('share equal parts: the same expression is the same node', () => {
    const graph = new Graph();
    const sum = (): Node => graph.apply('add', graph.leaf('state', 0), graph.number(1));
    expect(sum()).toBe(sum());
    const { lines } = statements([graph.apply('multiply', sum(), sum())], ({ index }) => `m[${index}]`, 'v');
    expect(lines.filter((line) => line.includes('+'))).toHaveLength(1);
  });
});
