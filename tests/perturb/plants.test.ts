import { describe, expect, it } from 'vitest';
import { ParameterSpace } from '../../src/perturb/parameter_space.js';
import { type Plant, plantOrigins, plantsToTry } from '../../src/perturb/plants.js';
import { name, number, operation, parameter, unitBox } from './parameters.js';

const run = { seed: 11, confidence: 0.95 };

function plantsOf(space: ParameterSpace, plants: number, seed = 11): Plant[] {
  return [...plantsToTry(space, { ...run, seed, plants })];
}

function from(origin: Plant['origin'], plants: Plant[]): number[][] {
  return plants.filter((plant) => plant.origin === origin).map(({ values }) => [...values]);
}

describe('the plants to try', () => {
  const space = new ParameterSpace([
    parameter('mass', 2, 6, { nominal: 3 }),
    parameter('fixed', 5, 5),
    parameter('friction', 0, 8, { nominal: 0 }),
  ]);
  const plants = plantsOf(space, 50);

  it('come in a fixed order, nominal first', () => {
    const order = plants.map(({ origin }) => plantOrigins.indexOf(origin));
    expect(order).toEqual([...order].sort((a, b) => a - b));
    expect(plants[0]).toEqual({ origin: 'nominal', values: Float64Array.of(3, 5, 0) });
  });

  it('have every parameter alone at each bound that is not its nominal value', () => {
    expect(from('single', plants)).toEqual([
      [2, 5, 0],
      [6, 5, 0],
      [3, 5, 8],
    ]);
  });

  it('have every corner once', () => {
    expect(from('corner', plants)).toEqual([
      [2, 5, 0],
      [6, 5, 0],
      [2, 5, 8],
      [6, 5, 8],
    ]);
  });

  it('have exactly as many independent draws as asked for, inside the bounds and all different', () => {
    const draws = from('independent', plants);
    expect(draws).toHaveLength(50);
    expect(new Set(draws.map(String)).size).toBe(50);
    for (const [mass, fixed, friction] of draws) {
      expect(mass >= 2 && mass <= 6 && fixed === 5 && friction >= 0 && friction <= 8).toBe(true);
    }
  });

  it('reach the bounds by bias to edges, and fill the box by low discrepancy', () => {
    const nearEdge = ([mass]: number[]): boolean => Math.abs(mass - 2) < 1e-9 || Math.abs(mass - 6) < 1e-9;
    expect(from('edge_biased', plants).some(nearEdge)).toBe(true);
    const eighths = new Set(from('spread', plants).map(([mass]) => Math.floor((mass - 2) * 2)));
    expect(eighths.size).toBe(8);
  });

  it('are the same for the same seed, and others for another', () => {
    expect(plantsOf(space, 50)).toEqual(plants);
    expect(from('independent', plantsOf(space, 50, 12))).not.toEqual(from('independent', plants));
  });

  it('draw the same independent plants first however many are asked for', () => {
    expect(from('independent', plantsOf(space, 80)).slice(0, 50)).toEqual(from('independent', plants));
  });

  it('let derived parameters follow in saved counterexamples too, and leave out values that are no longer listed', () => {
    const values = [2, 3, 4];
    const listed = new ParameterSpace([
      parameter('gear', 2, 4, { nominal: 3, distribution: { kind: 'values', values } }),
      parameter('torque', 30, 30, { nominal: 30, derived: operation(name('gear'), '*', number(10)) }),
    ]);
    const saved = [Float64Array.of(4, 30), Float64Array.of(2.5, 30)];
    const plants = [...plantsToTry(listed, { ...run, plants: 1 }, saved)];
    expect(from('saved', plants)).toEqual([[4, 40]]);
  });

  it('try saved counterexamples right after the nominal plant', () => {
    const saved = Float64Array.of(2.5, 5, 4);
    const [, second] = plantsToTry(space, { ...run, plants: 1 }, [saved]);
    expect(second).toEqual({ origin: 'saved', values: saved });
  });

  it('are the nominal one alone where nothing is uncertain', () => {
    expect(plantsOf(new ParameterSpace([parameter('a', 1, 1)]), 50)).toHaveLength(1);
    expect(plantsOf(new ParameterSpace([]), 50)).toHaveLength(1);
  });
});

it('a run with few independent plants has no more extras of each kind, and one without any has none', () => {
  const space = new ParameterSpace(unitBox(3));
  for (const count of [0, 5]) {
    const plants = plantsOf(space, count);
    expect(from('spread', plants)).toHaveLength(count);
    expect(from('edge_biased', plants)).toHaveLength(count);
  }
});

describe('many parameters', () => {
  it('with ten every corner is tried', () => {
    const corners = from('corner', plantsOf(new ParameterSpace(unitBox(10)), 0));
    expect(new Set(corners.map(String)).size).toBe(1024);
  });

  it('with more a seeded choice of corners', () => {
    const corners = from('corner', plantsOf(new ParameterSpace(unitBox(12)), 0));
    expect(corners).toHaveLength(1024);
    expect(corners.flat().every((value) => Math.abs(value) === 1)).toBe(true);
  });

  it('with more than the sequence has dimensions the rest is drawn', () => {
    const points = from('spread', plantsOf(new ParameterSpace(unitBox(45)), 70));
    expect(points).toHaveLength(64);
    expect(new Set(points.map((values) => values[44])).size).toBe(64);
  });
});

describe('conditions on the plants', () => {
  const below = operation(name('x0'), '<=', name('x1'));

  it('keep out every plant that does not fulfil them, of whatever origin', () => {
    const perturbation = { ...run, plants: 200, onlyWhere: [below] };
    const plants = [...plantsToTry(new ParameterSpace(unitBox(2), perturbation), perturbation)];
    expect(plants.every(({ values }) => values[0] <= values[1])).toBe(true);
    expect(from('independent', plants)).toHaveLength(200);
    expect(from('corner', plants)).toHaveLength(3);
  });

  it('that leave no room are an error, not an endless search', () => {
    const never = operation(number(0), '>', number(1));
    const perturbation = { ...run, plants: 1, onlyWhere: [never] };
    expect(() => [...plantsToTry(new ParameterSpace(unitBox(1), perturbation), perturbation)]).toThrow(
      'none of 10000 plants',
    );
  });
});
