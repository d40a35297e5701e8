/** A constructed box of moves with a worst case known by construction. */
export interface Box {
  title: string;
  size: number;
  /** Headroom at a move; broken below zero. */
  headroom: (x: Float64Array) => number;
  /** The least headroom in the box. */
  worst: number;
}

const square = (x: number): number => x * x;
const sum = (x: ArrayLike<number>, of: (x: number, k: number) => number): number =>
  Array.from(x).reduce((total, value, k) => total + of(value, k), 0);

/** Zero far from the centre, 1 + depth at it. */
function well(x: Float64Array, centre: readonly number[], radius: number, depth: number): number {
  const far = sum(x, (value, k) => square((value - centre[k]) / radius));
  return (1 + depth) * Math.exp(-far);
}

const signs = [1, -1, -1, 1, 1, -1, 1, -1, -1, -1];
const interior = [0.31, -0.62, 0.17, 0.55, -0.43];
const wells3 = [
  [0.6, 0.6, 0.6],
  [-0.6, 0.5, -0.4],
  [0.5, -0.6, -0.5],
  [-0.5, -0.5, 0.6],
];

/** Twelve boxes. Each worst case follows from the formula; where it is not plain a line says how. */
export const boxes: Box[] = [
  {
    title: 'interior worst in two parameters, breaking on 0.1 % of the box',
    size: 2,
    headroom: (x) => -0.01 + 8 * (square(x[0] - 0.37) + square(x[1] + 0.61)),
    worst: -0.01,
  },
  {
    title: 'interior worst in five parameters',
    size: 5,
    headroom: (x) => -0.05 + sum(x, (value, k) => square(value - interior[k])),
    worst: -0.05,
  },
  {
    title: 'curved valley in four parameters (Rosenbrock 1960, scaled to the box)',
    size: 4,
    headroom: (x) => {
      const y = Array.from(x, (value) => 1.5 * value + 0.25);
      const value = sum(y.slice(1), (next, k) => 100 * square(next - y[k] * y[k]) + square(1 - y[k]));
      return -0.1 + 0.01 * value;
    },
    worst: -0.1,
  },
  {
    title: 'one corner of ten parameters, each adding its share',
    size: 10,
    headroom: (x) => 0.95 - 0.1 * sum(x, (value, k) => value * signs[k]),
    worst: -0.05,
  },
  {
    title: 'one corner of ten parameters which all must be there at once',
    size: 10,
    headroom: (x) => 0.8 - Array.from(x).reduce((all, value, k) => all * ((1 + value * signs[k]) / 2), 1),
    worst: -0.2,
  },
  {
    title: 'one corner of ten parameters that the slopes lead away from',
    size: 10,
    // Falls gently to 0.2 at the wrong corner; at the other end it breaks.
    headroom: (x) => {
      const toward = sum(x, (value, k) => value * signs[k]) / 10;
      return 0.5 + 0.3 * toward - 9.5 * Math.max(0, toward - 0.9);
    },
    worst: 0.8 - 0.95,
  },
  {
    title: 'thin diagonal sliver in two parameters',
    size: 2,
    headroom: (x) => 20 * Math.abs(x[0] - x[1] - 0.013) + square(x[0] - 0.4) - 0.004,
    worst: -0.004,
  },
  {
    title: 'thin diagonal sliver in four parameters, a hundred times longer than wide',
    size: 4,
    headroom: (x) => {
      const along = (x[0] + x[1] + x[2] + x[3]) / 2;
      const all = sum(x, square);
      return 100 * (all - along * along) + square(along - 0.5) - 0.01;
    },
    worst: -0.01,
  },
  {
    title: 'two disconnected regions, the wider one not deep enough to break',
    size: 2,
    headroom: (x) => 1 - well(x, [-0.5, -0.4], 0.5, -0.05) - well(x, [0.7, 0.65], 0.13, 0.2),
    worst: -0.2,
  },
  {
    title: 'four disconnected regions in three parameters, one a little deeper',
    size: 3,
    headroom: (x) => 1 - wells3.reduce((total, at, k) => total + well(x, at, 0.3, k === 2 ? 0.2 : 0.05), 0),
    worst: -0.2,
  },
  {
    title: 'worst on a face of six parameters: three at bounds, three inside',
    size: 6,
    headroom: (x) =>
      0.55 - 0.2 * (x[0] - x[1] + x[2]) + sum(x.subarray(3), (value, k) => square(value - interior[k])),
    worst: -0.05,
  },
  {
    title: 'ripples with many local worst cases in three parameters',
    size: 3,
    headroom: (x) =>
      sum(
        x,
        (value, k) => square(value - interior[k]) - 0.1 * Math.cos(6 * Math.PI * (value - interior[k])),
      ) + 0.25,
    worst: -0.05,
  },
];
