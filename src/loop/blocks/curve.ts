import type { TargetArithmetic } from '../arithmetic.js';
import type { Graph, Node } from '../graph.js';

/** A curve through points; held at its ends. */
export interface Curve {
  /** Ascending. */
  points: readonly number[];
  values: readonly Node[];
  between: 'linear' | 'cubic';
}

/**
 * The value of a curve at x. With p, q the points around x, v, w their values, and m, n their slopes:
 *
 *     linear   y = v + ((w − v)·(x − p))/(q − p)
 *     cubic    s = (x − p)/(q − p),  y = v + s·(h·m + s·((3·d − h·(2·m + n)) + s·(h·(m + n) − 2·d))),  h = q − p, d = w − v
 *
 * The slopes of the cubic keep the curve monotone where the values are (Fritsch and Carlson, 'Monotone piecewise cubic
 * interpolation', 1980); they are the weighted harmonic means of Fritsch and Butland, 1984 (from memory). What follows from
 * numbers alone is formed in double precision and rounded once.
 */
export function valueAt(curve: Curve, x: Node, arithmetic: TargetArithmetic): Node {
  const { points, values } = curve;
  if (values.length === 1) return values[0];
  const ends = [points[0], points[points.length - 1]].map((point) => arithmetic.number(point));
  const inside = arithmetic.apply('limit', x, ends[0], ends[1]);
  // Where the slope does not change, the change of interval stays off the point: a loop at rest there has its margins.
  const hair = smallest * (points[points.length - 1] - points[0]);
  const changes = points.map((point, k) =>
    isSmooth(curve, k) ? arithmetic.graph.number(point - hair) : arithmetic.number(point),
  );
  const pick = (of: (interval: number) => Node): Node => picked(changes, inside, arithmetic, of);
  return curve.between === 'linear'
    ? chord(curve, inside, pick, arithmetic)
    : arch(curve, inside, pick, arithmetic);
}

/** As a share of the whole: finer than any number format whose numbers reach so far. */
const smallest = 1e-14;

/** Whether the slope is the same on both sides of a point. */
function isSmooth({ points, values, between }: Curve, k: number): boolean {
  if (between === 'cubic' || k === 0 || k === points.length - 1) return true;
  const [before, here, after] = [values[k - 1], values[k], values[k + 1]];
  if (before.kind !== 'number' || here.kind !== 'number' || after.kind !== 'number') return false;
  const slopes = [
    (here.value - before.value) / (points[k] - points[k - 1]),
    (after.value - here.value) / (points[k + 1] - points[k]),
  ];
  return Math.abs(slopes[1] - slopes[0]) <= 1e-12 * (Math.abs(slopes[0]) + Math.abs(slopes[1]));
}

type Pick = (of: (interval: number) => Node) => Node;

/** What belongs to the interval in which x lies, by halving; entry k is where interval k begins. */
function picked(
  changes: readonly Node[],
  x: Node,
  arithmetic: TargetArithmetic,
  of: (interval: number) => Node,
): Node {
  const among = (first: number, last: number): Node => {
    if (first === last) return of(first);
    const middle = Math.ceil((first + last) / 2);
    const below = arithmetic.apply('less', x, changes[middle]);
    const [lower, upper] = [among(first, middle - 1), among(middle, last)];
    return lower === upper ? lower : arithmetic.apply('choose', below, lower, upper);
  };
  return among(0, changes.length - 2);
}

function chord({ points, values }: Curve, x: Node, pick: Pick, arithmetic: TargetArithmetic): Node {
  const start = pick((k) => arithmetic.number(points[k]));
  const length = pick((k) => arithmetic.number(points[k + 1] - points[k]));
  const [from, to] = [pick((k) => values[k]), pick((k) => values[k + 1])];
  const rise = arithmetic.multiply(arithmetic.subtract(to, from), arithmetic.subtract(x, start));
  return arithmetic.add(from, arithmetic.divide(rise, length));
}

/** The three factors of the cubic are formed from numbers where the values are numbers. */
function arch({ points, values }: Curve, x: Node, pick: Pick, arithmetic: TargetArithmetic): Node {
  const { graph } = arithmetic;
  const slopes = monotoneSlopes(points, values, graph);
  const factors = points.slice(1).map((point, k) => {
    const h = graph.number(point - points[k]);
    const [m, n] = [k, k + 1].map((at) => graph.apply('multiply', h, slopes[at]));
    const rise = graph.apply('subtract', values[k + 1], values[k]);
    return cubicFactors(m, n, rise, graph).map((factor) => arithmetic.take(factor));
  });
  const start = pick((k) => arithmetic.number(points[k]));
  const length = pick((k) => arithmetic.number(points[k + 1] - points[k]));
  const share = arithmetic.divide(arithmetic.subtract(x, start), length);
  const [first, second, third] = [0, 1, 2].map((power) => pick((k) => factors[k][power]));
  const inner = arithmetic.sumOfProducts([share], [third], second);
  const middle = arithmetic.sumOfProducts([share], [inner], first);
  return arithmetic.sumOfProducts(
    [share],
    [middle],
    pick((k) => values[k]),
  );
}

/** Factors of s, s² and s³ between two points with slopes m and n over the whole interval. */
function cubicFactors(m: Node, n: Node, rise: Node, graph: Graph): Node[] {
  const [two, three] = [graph.number(2), graph.number(3)];
  const steep = graph.apply('add', graph.apply('multiply', two, m), n);
  return [
    m,
    graph.apply('subtract', graph.apply('multiply', three, rise), steep),
    graph.apply('subtract', graph.apply('add', m, n), graph.apply('multiply', two, rise)),
  ];
}

/** The slope at each point. */
function monotoneSlopes(points: readonly number[], values: readonly Node[], graph: Graph): Node[] {
  const lengths = points.slice(1).map((point, k) => point - points[k]);
  const secants = lengths.map((length, k) =>
    graph.apply('divide', graph.apply('subtract', values[k + 1], values[k]), graph.number(length)),
  );
  if (secants.length === 1) return [secants[0], secants[0]];
  const inner = secants
    .slice(1)
    .map((secant, k) => harmonicMean(lengths[k], lengths[k + 1], secants[k], secant, graph));
  const last = secants.length - 1;
  return [
    endSlope(lengths[0], lengths[1], secants[0], secants[1], graph),
    ...inner,
    endSlope(lengths[last], lengths[last - 1], secants[last], secants[last - 1], graph),
  ];
}

/** Zero where the secants turn. */
function harmonicMean(before: number, after: number, one: Node, other: Node, graph: Graph): Node {
  const [first, second] = [2 * after + before, after + 2 * before].map((weight) => graph.number(weight));
  const total = graph.apply('add', graph.apply('divide', first, one), graph.apply('divide', second, other));
  const mean = graph.apply('divide', graph.number(3 * (before + after)), total);
  const sameWay = graph.apply('less', graph.number(0), graph.apply('multiply', one, other));
  return graph.apply('choose', sameWay, mean, graph.number(0));
}

/** From three points, kept so small that the curve does not turn. */
function endSlope(near: number, far: number, one: Node, other: Node, graph: Graph): Node {
  const zero = graph.number(0);
  const weighted = graph.apply(
    'subtract',
    graph.apply('multiply', graph.number((2 * near + far) / (near + far)), one),
    graph.apply('multiply', graph.number(near / (near + far)), other),
  );
  const against = graph.apply('less_or_equal', graph.apply('multiply', weighted, one), zero);
  const turning = graph.apply('less', graph.apply('multiply', one, other), zero);
  const most = graph.apply('multiply', graph.number(3), one);
  const tooSteep = graph.apply('less', graph.apply('abs', most), graph.apply('abs', weighted));
  const bounded = graph.apply('choose', turning, graph.apply('choose', tooSteep, most, weighted), weighted);
  return graph.apply('choose', against, zero, bounded);
}
