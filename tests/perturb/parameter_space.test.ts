import fc from 'fast-check';
import { uniformFloat64 } from 'pure-rand/distribution/uniformFloat64';
import { xoroshiro128plus } from 'pure-rand/generator/xoroshiro128plus';
import { describe, expect, it } from 'vitest';
import { ParameterSpace } from '../../src/perturb/parameter_space.js';
import { name, number, operation, parameter, place, unitBox } from './parameters.js';

const box = [
  parameter('mass', 2, 6, { nominal: 3 }),
  parameter('fixed', 5, 5),
  parameter('friction', 0, 8, { nominal: 0 }),
  parameter('gear', 2, 4, { nominal: 3, distribution: { kind: 'values', values: [2, 3, 4] } }),
  parameter('stiffness', 0, 0, { derived: operation(name('mass'), '*', number(10)) }),
];

/** Rank correlation (Spearman 1904) of two columns. */
function rankCorrelation(a: number[], b: number[]): number {
  const ranks = (values: number[]): number[] => {
    const order = values.map((_, i) => i).sort((i, j) => values[i] - values[j]);
    const rank = new Array<number>(values.length);
    order.forEach((i, at) => {
      rank[i] = at;
    });
    return rank;
  };
  const [x, y] = [ranks(a), ranks(b)];
  const n = a.length;
  const squares = x.reduce((sum, value, i) => sum + (value - y[i]) ** 2, 0);
  return 1 - (6 * squares) / (n * (n * n - 1));
}

describe('the box of the free parameters', () => {
  const space = new ParameterSpace(box);

  it('moves only what is uncertain, and only where there is room', () => {
    expect(space.free).toEqual([0, 2, 3]);
    expect(space.least).toEqual([-1, 0, -1]);
    expect(space.most).toEqual([1, 1, 1]);
  });

  it('is at the bounds exactly at moves of one, and derived parameters follow', () => {
    expect([...space.plantAt([0, 0, 0])]).toEqual([3, 5, 0, 3, 30]);
    expect([...space.plantAt([-1, 1, 1])]).toEqual([2, 5, 8, 4, 20]);
    expect([...space.plantAt([0.5, 0.25, 0.4])]).toEqual([4.5, 5, 2, 3, 45]);
  });

  it('move and plant undo each other', () => {
    fc.assert(
      fc.property(
        fc.double({ min: -1, max: 1, noNaN: true }),
        fc.double({ min: 0, max: 1, noNaN: true }),
        fc.constantFrom(-1, 0, 1),
        (a, b, c) => {
          const back = space.moveOf(space.plantAt([a, b, c]));
          [a, b, c].forEach((move, k) => {
            expect(back[k]).toBeCloseTo(move, 12);
          });
        },
      ),
      { seed: 31 },
    );
  });

  it('goes on beyond the bounds, but a quantity of one sign keeps it', () => {
    expect(space.plantAt([2, 2, 0]).slice(0, 3)).toEqual(Float64Array.of(9, 5, 16));
    expect(space.plantAt([-4, 0, -3])[0]).toBe(0.02);
    expect(space.plantAt([0, 0, -3])[3]).toBe(2);
    expect(new ParameterSpace([parameter('x', -1, 1)]).plantAt([-4])[0]).toBe(-4);
  });

  it('knows which plants the conditions keep out', () => {
    const onlyWhere = [operation(name('mass'), '>', name('friction'))];
    const kept = new ParameterSpace(box, { onlyWhere });
    expect(kept.allows(kept.plantAt([0, 0.2, 0]))).toBe(true);
    expect(kept.allows(kept.plantAt([-1, 1, 0]))).toBe(false);
  });
});

describe('correlated plants', () => {
  const generator = xoroshiro128plus(3);
  const draws = (space: ParameterSpace, count: number): Float64Array[] =>
    Array.from({ length: count }, () => space.drawnAt(space.free.map(() => uniformFloat64(generator))));

  // The rank correlation of n points has a standard deviation of about 1/√n.
  it.each([0.8, -0.5, 0])(
    'have the rank correlation %f that was asked for, whatever the distributions',
    (rho) => {
      const parameters = [
        parameter('a', 1, 100, { nominal: 10, distribution: { kind: 'log_uniform' } }),
        parameter('b', 0, 1),
        parameter('c', -2, 2, { distribution: { kind: 'normal', deviation: 1 } }),
      ];
      const correlations = [{ of: 'a', with: 'c', coefficient: rho, place }];
      const plants = draws(new ParameterSpace(parameters, { correlations }), 4000);
      const column = (i: number): number[] => plants.map((values) => values[i]);
      expect(Math.abs(rankCorrelation(column(0), column(2)) - rho)).toBeLessThan(0.05);
      expect(Math.abs(rankCorrelation(column(0), column(1)))).toBeLessThan(0.05);
    },
  );

  it('keep each distribution as it was', () => {
    const correlations = [{ of: 'x0', with: 'x1', coefficient: 0.9, place }];
    const plants = draws(new ParameterSpace(unitBox(2), { correlations }), 4000);
    for (const i of [0, 1]) {
      const inLowerQuarter = plants.filter((values) => values[i] < -0.5).length / 4000;
      expect(Math.abs(inLowerQuarter - 0.25)).toBeLessThan(0.03);
    }
  });

  it('are refused where the correlations contradict each other', () => {
    const pair = (of: string, other: string, coefficient: number) => ({
      of,
      with: other,
      coefficient,
      place,
    });
    const correlations = [pair('x0', 'x1', 0.9), pair('x1', 'x2', 0.9), pair('x0', 'x2', -0.9)];
    expect(() => new ParameterSpace(unitBox(3), { correlations })).toThrow('cannot all hold at once');
  });
});
