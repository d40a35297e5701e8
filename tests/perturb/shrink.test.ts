import fc from 'fast-check';
import { describe, expect, it } from 'vitest';
import { ParameterSpace } from '../../src/perturb/parameter_space.js';
import { rounderMovesIn } from '../../src/perturb/rounder_moves.js';
import { shrink } from '../../src/perturb/shrink.js';
import { Trials } from '../../src/perturb/trials.js';
import { parameter, unitBox } from './parameters.js';

type Headroom = (x: Float64Array) => number;

const unrounded = (): number[] => [];

async function shrunk(headroom: Headroom, start: number[], budget = 600, rounder = unrounded) {
  const move = Float64Array.from(start);
  const trials = new Trials(async (moves) => moves.map(headroom), budget);
  const box = new ParameterSpace(unitBox(start.length));
  const found = await shrink([{ move, rank: headroom(move) }], box, rounder, trials);
  return { ...found, length: Math.hypot(...found.move), used: trials.used };
}

/** Boxes whose shortest counterexample with the fewest parameters moved is known, with its length. */
const known: [string, Headroom, number[], number, number][] = [
  ['one parameter is enough, 63 % of the way', (x) => 0.63 + x[1] + 0.1 * x[0], [-1, -1, 1], 1, 0.63],
  // |w·x| = 1.2 with w = (1, 1): the foot of the perpendicular is (0.6, 0.6).
  ['two parameters on a straight edge', (x) => 1.2 - x[0] - x[1], [1, 1, 0.5], 2, 0.6 * Math.SQRT2],
  // Distance of the line 3x + 4y = 5 from the origin is 1, but x ≤ 1 and y ≤ 1 alone do not reach it (3 < 5, 4 < 5).
  ['two parameters on an oblique edge', (x) => 5 - 3 * x[0] - 4 * x[1], [1, 1, -1, 1], 2, 1],
  ['outside a circle', (x) => 1.1 - Math.hypot(x[0], x[1]), [-1, 1], 2, 1.1],
  // Product of two: on x·y = 0.25 the nearest point is (0.5, 0.5).
  ['on a hyperbola', (x) => 0.25 - x[0] * x[1], [1, 0.9], 2, 0.5 * Math.SQRT2],
  [
    'three parameters on a plane',
    (x) => 2.2 - x[0] + x[1] - x[2] + 0.01 * x[3],
    [1, -1, 1, 1],
    3,
    2.2 / Math.sqrt(3),
  ],
  // A ball around (0.5, 0.5): the nearest point lies on the ray to its centre.
  [
    'a ball inside the box',
    (x) => Math.hypot(x[0] - 0.5, x[1] - 0.5) - 0.3,
    [0.6, 0.6],
    2,
    0.5 * Math.SQRT2 - 0.3,
  ],
];

describe('shrinking a counterexample', () => {
  it.each(known)('%s: within 1 % of the shortest', async (_, headroom, start, parameters, length) => {
    const found = await shrunk(headroom, start);
    expect(found.rank).toBeLessThan(0);
    expect([...found.move].filter((x) => x !== 0)).toHaveLength(parameters);
    expect(found.length).toBeGreaterThanOrEqual(length * (1 - 1e-9));
    expect(found.length).toBeLessThanOrEqual(length * 1.01);
  });

  it('always breaks, and never lies farther than it began, whatever the edge', async () => {
    const weight = fc.double({ min: -1, max: 1, noNaN: true });
    await fc.assert(
      fc.asyncProperty(
        weight,
        weight,
        weight,
        fc.double({ min: 0.05, max: 1, noNaN: true }),
        async (a, b, c, d) => {
          const headroom: Headroom = (x) => d - a * x[0] - b * x[1] - c * x[2] * x[0];
          const start = [Math.sign(a) || 1, Math.sign(b) || 1, Math.sign(c * a) || 1];
          fc.pre(headroom(Float64Array.from(start)) < 0);
          const found = await shrunk(headroom, start, 300);
          expect(headroom(found.move)).toBeLessThan(0);
          expect(found.length).toBeLessThanOrEqual(Math.hypot(...start) + 1e-12);
        },
      ),
      { seed: 51, numRuns: 40 },
    );
  });

  it('keeps what breaks when the budget runs out at once', async () => {
    const found = await shrunk((x) => 1 - x[0] - x[1], [1, 1], 0);
    expect(found.rank).toBeLessThan(0);
    expect([...found.move]).toEqual([1, 1]);
  });

  it('leaves the nominal plant where it breaks itself', async () => {
    const found = await shrunk(() => -1, [0.5, -0.5]);
    expect([...found.move]).toEqual([0, 0]);
  });

  it('begins with the counterexample that moves the fewest parameters', async () => {
    const headroom: Headroom = (x) => 0.8 - Math.max(x[2], (x[0] + x[1]) / 2);
    const trials = new Trials(async (moves) => moves.map(headroom), 300);
    const starts = [Float64Array.of(1, 1, 0), Float64Array.of(0, 0, 1)];
    const broken = starts.map((move) => ({ move, rank: headroom(move) }));
    const found = await shrink(broken, new ParameterSpace(unitBox(3)), unrounded, trials);
    expect([...found.move.subarray(0, 2)]).toEqual([0, 0]);
    expect(found.move[2]).toBeCloseTo(0.8, 2);
  });
});

describe('round numbers', () => {
  const space = new ParameterSpace([
    parameter('friction', 10, 90, { nominal: 30 }),
    parameter('lag', 0.03, 0.05, { unit: { text: 'ms', dimension: [0, 0, 1, 0, 0, 0, 0, 0], scale: 1e-3 } }),
    parameter('gear', 2, 4, { nominal: 3, distribution: { kind: 'values', values: [2, 3, 4] } }),
  ]);
  const rounder = rounderMovesIn(space);
  const valuesOf = (k: number, moves: number[]): number[] =>
    moves.map((move) => space.plantAt(new Float64Array(3).with(k, move))[space.free[k]]);

  it('are tried the roundest first, and never nearer to nominal', () => {
    // 17.4 lies 63 % of the way down from 30 to 10; half a per cent of the way is 0.1.
    const values = valuesOf(0, rounder(0, (17.43 - 30) / 20));
    expect(values[0]).toBeCloseTo(17.4, 9);
    expect(Math.max(...values)).toBeLessThanOrEqual(17.43 + 1e-9);
  });

  it('are round in the unit that the spec writes', () => {
    const [first] = valuesOf(1, rounder(1, (0.0431 - 0.04) / 0.01));
    expect(first * 1000).toBeCloseTo(43.1, 9);
  });

  it('leave bounds and listed values alone', () => {
    expect(rounder(0, -1)).toEqual([]);
    expect(rounder(2, 1)).toEqual([]);
  });

  it('stay within the bounds and half a per cent of the way', () => {
    fc.assert(
      fc.property(fc.double({ min: -0.999, max: 0.999, noNaN: true }), (move) => {
        fc.pre(Math.abs(move) > 1e-3);
        for (const round of rounder(0, move)) {
          expect(Math.sign(round)).toBe(Math.sign(move));
          expect(Math.abs(round)).toBeGreaterThanOrEqual(Math.abs(move) - 1e-9);
          expect(Math.abs(round)).toBeLessThanOrEqual(Math.min(1, Math.abs(move) + 0.005 + 1e-9));
        }
      }),
      { seed: 52 },
    );
  });

  it('are taken only while it still breaks', async () => {
    const threshold = (17.43 - 30) / 20;
    const headroom: Headroom = (x) => x[0] - threshold;
    const trials = new Trials(async (moves) => moves.map(headroom), 100);
    const start = Float64Array.of(-1, 0, 0);
    const found = await shrink([{ move: start, rank: headroom(start) }], space, rounder, trials);
    expect(space.plantAt(found.move)[0]).toBeCloseTo(17.4, 9);
  });
});
