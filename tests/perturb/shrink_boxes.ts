import type { ParameterDefinition, Perturbation } from '../../src/spec/spec.js';
import { name, operation, parameter, unitBox } from './parameters.js';

/** A box whose counterexample with the fewest parameters moved, and of these the shortest, is known by construction. */
export interface ShrinkBox {
  title: string;
  parameters: ParameterDefinition[];
  onlyWhere?: Perturbation['onlyWhere'];
  /** Headroom of a plant (values of all parameters); broken below zero. */
  headroom: (values: Float64Array) => number;
  moved: number;
  /** Euclidean, in shares of the way to the bounds. */
  length: number;
}

const signs = [1, -1, -1, 1, 1, -1, 1, -1, -1, -1];
const sum = (x: ArrayLike<number>, of: (x: number, k: number) => number): number =>
  Array.from(x).reduce((total, value, k) => total + of(value, k), 0);
const square = (x: number): number => x * x;
const box = (title: string, size: number, rest: Omit<ShrinkBox, 'title' | 'parameters'>): ShrinkBox => ({
  title,
  parameters: unitBox(size),
  ...rest,
});

/** The parameters of a unit box are its moves. */
export const shrinkBoxes: ShrinkBox[] = [
  box('one parameter is enough, 63 % of the way', 3, {
    headroom: (x) => 0.63 + x[1] + 0.1 * x[0],
    moved: 1,
    length: 0.63,
  }),
  // x + y = 1.2: the foot of the perpendicular is (0.6, 0.6).
  box('two parameters on a straight edge', 3, {
    headroom: (x) => 1.2 - x[0] - x[1],
    moved: 2,
    length: 0.6 * Math.SQRT2,
  }),
  // The distance of the line 3x + 4y = 5 from the origin is 1, but x ≤ 1 and y ≤ 1 alone do not reach it (3 < 5, 4 < 5).
  box('two parameters on an oblique edge', 4, {
    headroom: (x) => 5 - 3 * x[0] - 4 * x[1],
    moved: 2,
    length: 1,
  }),
  box('outside a circle', 2, { headroom: (x) => 1.1 - Math.hypot(x[0], x[1]), moved: 2, length: 1.1 }),
  // On x·y = 0.25 the nearest point is (0.5, 0.5).
  box('on a hyperbola', 2, { headroom: (x) => 0.25 - x[0] * x[1], moved: 2, length: 0.5 * Math.SQRT2 }),
  box('three parameters on a plane', 4, {
    headroom: (x) => 2.2 - x[0] + x[1] - x[2] + 0.01 * x[3],
    moved: 3,
    length: 2.2 / Math.sqrt(3),
  }),
  // The nearest point of a ball around (0.5, 0.5) lies on the ray to its centre.
  box('a ball inside the box', 2, {
    headroom: (x) => Math.hypot(x[0] - 0.5, x[1] - 0.5) - 0.3,
    moved: 2,
    length: 0.5 * Math.SQRT2 - 0.3,
  }),
  // (1, 0.55) lies on 4x + 2y = 5.1 too; its foot, (1.02, 0.51), lies outside.
  box('two parameters on a diagonal, the foot of the perpendicular outside the box', 5, {
    headroom: (x) => 5.1 - 4 * x[0] - 2 * x[1],
    moved: 2,
    length: Math.hypot(1, 0.55),
  }),
  // With fewer than ten at their ends the sum stays below 9.5, and of equal shares each is 0.95.
  box('one corner of ten parameters, each adding its share', 10, {
    headroom: (x) => 0.95 - 0.1 * sum(x, (value, k) => value * signs[k]),
    moved: 10,
    length: 0.95 * Math.sqrt(10),
  }),
  // ((1 + t)/2)^10 = 0.8.
  box('one corner of ten parameters which all must be there at once', 10, {
    headroom: (x) => 0.8 - Array.from(x).reduce((all, value, k) => all * ((1 + value * signs[k]) / 2), 1),
    moved: 10,
    length: (2 * 0.8 ** 0.1 - 1) * Math.sqrt(10),
  }),
  // Two of ten matter. On y = 1.4 − x² the length² x² + (1.4 − x²)² is least at x² = 0.9, y = 0.5.
  box('a parabola in two of ten parameters', 10, {
    headroom: (x) => 1.4 - square(x[3]) - x[7],
    moved: 2,
    length: Math.hypot(Math.sqrt(0.9), 0.5),
  }),
  // |x − y − 0.013| + (x − 0.4)² < 0.04, ten times longer than wide: the tip lies at x = 0.2, y = x − 0.013.
  box('a thin diagonal sliver', 2, {
    headroom: (x) => Math.abs(x[0] - x[1] - 0.013) + square(x[0] - 0.4) - 0.04,
    moved: 2,
    length: Math.hypot(0.2, 0.187),
  }),
  {
    title: 'a log-uniform parameter, broken below 0.03',
    parameters: [
      parameter('gap', 0.01, 1, { nominal: 0.1, distribution: { kind: 'log_uniform' } }),
      parameter('other', -1, 1),
    ],
    headroom: ([gap, other]) => Math.log(gap / 0.03) + 0.01 * other,
    moved: 1,
    length: 7 / 9,
  },
  // Gear 5 and beyond break: of the list it is the nearest, two thirds of the way from 3 to 6.
  {
    title: 'a discrete parameter, the third value from nominal',
    parameters: [
      parameter('gear', 2, 6, { nominal: 3, distribution: { kind: 'values', values: [2, 3, 4, 5, 6] } }),
      parameter('other', -1, 1),
    ],
    headroom: ([gear, other]) => 4.5 - gear + 0.01 * other,
    moved: 1,
    length: 2 / 3,
  },
  // The other must go 0.2 + gear/2: with gear 1 it is 0.7 of the way, with gear 0 the two lie farther together, with 2 it is too far.
  {
    title: 'a discrete parameter together with another',
    parameters: [
      parameter('gear', 0, 4, { nominal: 3, distribution: { kind: 'values', values: [0, 1, 2, 3, 4] } }),
      parameter('other', -1, 1),
    ],
    headroom: ([gear, other]) => 0.5 * gear + 0.2 - other,
    moved: 2,
    length: Math.hypot(2 / 3, 0.7),
  },
  // y ≤ 0.5·x alone is allowed: on 1.2 = x + y this is (0.8, 0.4).
  {
    title: 'a condition keeps the nearest point out',
    parameters: unitBox(2),
    onlyWhere: [operation(operation(name('x1'), '+', name('x1')), '<=', name('x0'))],
    headroom: (x) => 1.2 - x[0] - x[1],
    moved: 2,
    length: Math.hypot(0.8, 0.4),
  },
];
