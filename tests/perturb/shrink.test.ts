import fc from 'fast-check';
import { describe, expect, it } from 'vitest';
import { findWorst } from '../../src/perturb/find_worst.js';
import { ParameterSpace } from '../../src/perturb/parameter_space.js';
import { plantsToTry } from '../../src/perturb/plants.js';
import { rounderMovesIn } from '../../src/perturb/rounder_moves.js';
import { shrink } from '../../src/perturb/shrink.js';
import { type Ranked, type RankMoves, Trials } from '../../src/perturb/trials.js';
import { name, number, operation, parameter, unitBox } from './parameters.js';
import { shrinkBoxes } from './shrink_boxes.js';

type Headroom = (x: Float64Array) => number;

const unrounded = (): number[] => [];

async function shrunk(headroom: Headroom, start: number[], budget = 600, rounder = unrounded) {
  const move = Float64Array.from(start);
  const trials = new Trials(async (moves) => moves.map(headroom), budget);
  const box = new ParameterSpace(unitBox(start.length));
  const found = await shrink([{ move, rank: headroom(move) }], box, rounder, trials);
  return { ...found, length: Math.hypot(...found.move), used: trials.used };
}

/** What a run hands to be shrunk: of the plants to try, and of a search where none of them breaks, some that break. */
async function counterexamples(space: ParameterSpace, rank: RankMoves, seed: number): Promise<Ranked[]> {
  const plants = [...plantsToTry(space, { plants: 100, seed, confidence: 0.95 })];
  const moves = plants.map(({ values }) => space.moveOf(values));
  const ranks = await rank(moves);
  const known = moves.map((move, i): Ranked => ({ move, rank: ranks[i] }));
  const breaking = known.filter((one) => one.rank < 0).sort((a, b) => a.rank - b.rank);
  if (breaking.length > 0) return breaking.slice(0, 8);
  const trials = new Trials(rank, 2000 - known.length, known);
  await findWorst(known, space, trials, seed);
  return [trials.worst!];
}

describe('shrinking a counterexample', () => {
  it.each(shrinkBoxes)('$title: within 1 % of the shortest, on 20 seeds of 20', async (box) => {
    const space = new ParameterSpace(box.parameters, { onlyWhere: box.onlyWhere ?? [] });
    const rank: RankMoves = async (moves) =>
      moves.map((move) => {
        const values = space.plantAt(move);
        return space.allows(values) ? box.headroom(values) : Number.POSITIVE_INFINITY;
      });
    const missed: string[] = [];
    for (let seed = 1; seed <= 20; seed++) {
      const broken = await counterexamples(space, rank, seed);
      const trials = new Trials(rank, 500);
      const { move } = await shrink(broken, space, unrounded, trials);
      const values = space.plantAt(move);
      expect(box.headroom(values)).toBeLessThan(0);
      expect(space.allows(values)).toBe(true);
      const way = space.moveOf(values);
      const ratio = Math.hypot(...way) / box.length;
      expect(ratio).toBeGreaterThan(1 - 1e-9);
      const moved = way.filter((x) => x !== 0).length;
      if (moved !== box.moved || ratio > 1.01) missed.push(`seed ${seed}: ${moved} moved, ratio ${ratio}`);
    }
    expect(missed).toEqual([]);
  });

  it('moves listed parameters to listed values alone, and derived ones follow', async () => {
    const derived = operation(name('gear'), '*', number(10));
    const values = [0, 1, 2, 3, 4];
    const space = new ParameterSpace([
      parameter('gear', 0, 4, { nominal: 3, distribution: { kind: 'values', values } }),
      parameter('torque', 0, 0, { derived }),
    ]);
    const asked: number[] = [];
    const trials = new Trials(async (moves) => {
      asked.push(...moves.map((move) => space.moveOf(space.plantAt(move))[0] - move[0]));
      return moves.map((move) => space.plantAt(move)[1] - 15);
    }, 100);
    const found = await shrink([{ move: Float64Array.of(-1), rank: -15 }], space, unrounded, trials);
    expect([...space.plantAt(found.move)]).toEqual([1, 10]);
    expect(new Set(asked)).toEqual(new Set([0]));
  });

  it('costs few trials where one parameter is enough', async () => {
    const found = await shrunk((x) => 0.63 + x[1], [-1, -1, 1, 1]);
    expect(found.used).toBeLessThan(30);
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
