import fc from 'fast-check';
import { describe, expect, it } from 'vitest';
import { liftedMargins } from '../../src/linear/lifted_margins.js';
import { prepareResponseMatrix } from '../../src/linear/response.js';
import { separateLoops } from '../../src/linear/separate_loops.js';
import type { StateEquations } from '../../src/linear/state_equations.js';
import { systemOf } from './loops.js';

/** First-order loops of gains g on the diagonal, with what input j adds to state i beside it. */
function loopOf(
  gains: readonly number[],
  across: readonly (readonly [to: number, from: number])[] = [],
): StateEquations {
  const n = gains.length;
  const square = (entry: (i: number, j: number) => number): number[][] =>
    Array.from({ length: n }, (_, i) => Array.from({ length: n }, (_, j) => entry(i, j)));
  const acts = (i: number, j: number): boolean => across.some(([to, from]) => to === i && from === j);
  return systemOf(
    square((i, j) => (i === j ? 0.5 + 0.1 * i : 0)),
    square((i, j) => (i === j ? gains[i] : acts(i, j) ? 0.3 : 0)),
    square((i, j) => (i === j ? 1 : 0)),
    square(() => 0),
    1,
  );
}

const sizes = (parts: StateEquations[]): number[][] => parts.map(({ a, b }) => [b.columns, a.rows]);

describe('the loops that a loop with several signals falls into', () => {
  it('are one for each signal where none acts on another, each with its own states', () => {
    const parts = separateLoops(loopOf([0.1, 0.2, 0.3]), 3);
    expect(sizes(parts)).toEqual([
      [1, 1],
      [1, 1],
      [1, 1],
    ]);
    expect(parts.map(({ b }) => b.data[0])).toEqual([0.1, 0.2, 0.3]);
  });

  it('are as many where one acts on another and nothing comes back', () => {
    const parts = separateLoops(
      loopOf(
        [0.1, 0.2, 0.3],
        [
          [1, 0],
          [2, 1],
        ],
      ),
      3,
    );
    expect(sizes(parts)).toEqual([
      [1, 1],
      [1, 1],
      [1, 1],
    ]);
  });

  it('are one where each acts on the other, also by way of a third, and the rest stays apart', () => {
    const loop = loopOf(
      [0.1, 0.2, 0.3, 0.4],
      [
        [1, 0],
        [2, 1],
        [0, 2],
      ],
    );
    expect(sizes(separateLoops(loop, 4))).toEqual([
      [3, 3],
      [1, 1],
    ]);
    const all = loopOf(
      [0.1, 0.2],
      [
        [1, 0],
        [0, 1],
      ],
    );
    expect(separateLoops(all, 2)).toEqual([all]);
  });

  it('keep the changes of a signal together, in their order', () => {
    // Two signals with two changes each: first, second, first, second.
    const loop = loopOf(
      [0.1, 0.2, 0.3, 0.4],
      [
        [2, 0],
        [0, 2],
        [3, 1],
        [1, 3],
      ],
    );
    const parts = separateLoops(loop, 2);
    expect(sizes(parts)).toEqual([
      [2, 2],
      [2, 2],
    ]);
    expect([...parts[0].b.data]).toEqual([0.1, 0.3, 0.3, 0.3]);
    expect([...parts[1].b.data]).toEqual([0.2, 0.3, 0.3, 0.4]);
  });

  it('may have no states, but a feedthrough', () => {
    const loop = { ...loopOf([0, 0.2]), d: { rows: 2, columns: 2, data: Float64Array.of(0.7, 0, 0, 0) } };
    const [through] = separateLoops(loop, 2);
    expect([through.a.rows, through.d.data[0]]).toEqual([0, 0.7]);
  });

  // Of a block triangular matrix the eigenvalues are those of the blocks on its diagonal.
  it('have the responses of the whole on its diagonal, and together its margins', () => {
    const pair = fc.tuple(fc.integer({ min: 0, max: 3 }), fc.integer({ min: 0, max: 3 }));
    const pairs = fc.array(
      pair.filter(([to, from]) => to !== from),
      { maxLength: 5 },
    );
    fc.assert(
      fc.property(pairs, (across) => {
        const loop = loopOf([0.3, -0.2, 0.4, 0.25], across);
        const parts = separateLoops(loop, 4);
        expect(parts.reduce((sum, { b }) => sum + b.columns, 0)).toBe(4);
        const trace = (one: StateEquations): number =>
          prepareResponseMatrix(one)(0.7).reduce((sum, row, i) => sum + row[i].real, 0);
        expect(parts.reduce((sum, part) => sum + trace(part), 0)).toBeCloseTo(trace(loop), 12);
        const whole = liftedMargins(loop);
        const each = parts.map((part) => liftedMargins(part));
        expect(whole.stable).toBe(each.every(({ stable }) => stable));
        if (!whole.stable) return;
        const least = (of: (one: ReturnType<typeof liftedMargins>) => number): number =>
          Math.min(...each.map(of));
        expect(whole.gainMargin.ratio / least(({ gainMargin }) => gainMargin.ratio)).toBeCloseTo(1, 6);
      }),
      { numRuns: 30 },
    );
  });
});
