import { counting } from '../../loop/fixed_point.js';
import { firstTerm, type LeafKind, type Node, type OperationName } from '../../loop/graph.js';
import { everything, type Interval, isZero, size, widened } from './interval.js';
import { isNothing, type Slope, type SlopeField } from './slope.js';

/** Why there is no proof for a loop: something in it that intervals are not carried through. */
export class Unprovable extends Error {}

/** Values of the leaves over the box. */
export type SlopeLeaves = (leaf: LeafKind, index: number) => Slope;

/** Evaluates expressions of the loop over a box; quanta and number formats count as gain one, as in all linear analysis. */
export class SlopeEvaluation {
  private readonly known = new Map<Node, Slope>();
  private readonly failed = new Map<Node, Unprovable>();

  constructor(
    readonly field: SlopeField,
    private readonly leaves: SlopeLeaves,
  ) {}

  /** @throws {Unprovable} for an operation with no bounds here, or a choice that the box does not settle. */
  of(node: Node): Slope {
    const found = this.known.get(node);
    if (found) return found;
    const failure = this.failed.get(node);
    if (failure) throw failure;
    try {
      const value = this.fresh(node);
      this.known.set(node, value);
      return value;
    } catch (error) {
      if (error instanceof Unprovable) this.failed.set(node, error);
      throw error;
    }
  }

  private fresh(node: Node): Slope {
    if (node.kind === 'number') return this.field.constant(node.value);
    if (node.kind === 'leaf') return this.leaves(node.leaf, node.index);
    return this.operation(node.name, node.of);
  }

  private operation(name: OperationName, of: readonly Node[]): Slope {
    const { field } = this;
    const at = (i: number): Slope => this.of(of[i]);
    switch (name) {
      case 'add':
        return field.add(at(0), at(1));
      case 'subtract':
        return field.subtract(at(0), at(1));
      case 'multiply':
        return this.product(of[0], of[1]);
      case 'divide':
        return field.divide(at(0), at(1));
      case 'negate':
        return field.negate(at(0));
      case 'power':
        return this.power(at(0), at(1));
      case 'choose':
        return this.isTrue(at(0)) ? at(1) : at(2);
      case 'limit':
        return this.limited(at(0), at(1), at(2));
      case 'min':
        return this.less(at(0), at(1)) ? at(0) : at(1);
      case 'max':
        return this.less(at(0), at(1)) ? at(1) : at(0);
      case 'less':
        return field.constant(this.less(at(0), at(1)) ? 1 : 0);
      case 'less_or_equal':
        return field.constant(this.less(at(1), at(0)) ? 0 : 1);
      case 'equal':
        return field.constant(this.equals(at(0), at(1)) ? 1 : 0);
      case 'unequal':
        return field.constant(this.equals(at(0), at(1)) ? 0 : 1);
      case 'quantise':
      case 'single':
        return at(0);
      case 'fused_multiply_add':
        return field.add(this.product(of[0], of[1]), at(2));
      case 'fit':
        return this.isCounting(of[5]) ? field.constant(0) : at(0);
      case 'fit_quotient':
        return this.isCounting(of[5]) ? field.constant(0) : field.divide(at(0), at(1));
      case 'fit_sum':
        return this.isCounting(of[4]) ? field.constant(0) : this.sumOfProducts(of.slice(firstTerm));
      default:
        return this.call(name, at(0));
    }
  }

  /** Whether a format's operation counts what overflows, beside the equations. */
  private isCounting(overflow: Node): boolean {
    return overflow.kind === 'number' && overflow.value >= counting;
  }

  private sumOfProducts(of: readonly Node[]): Slope {
    let sum = this.field.constant(0);
    for (let at = 0; at < of.length; at += 2) sum = this.field.add(sum, this.product(of[at], of[at + 1]));
    return sum;
  }

  /** What is not known may be multiplied by nothing: as of two conditions one that does not hold and one that may. */
  private product(left: Node, right: Node): Slope {
    const known = [left, right].map((node) => this.knownOf(node));
    const nothing = known.find((value) => value && isNothing(value));
    return nothing ?? this.field.multiply(known[0] ?? this.of(left), known[1] ?? this.of(right));
  }

  private knownOf(node: Node): Slope | undefined {
    try {
      return this.of(node);
    } catch (error) {
      if (error instanceof Unprovable) return undefined;
      throw error;
    }
  }

  private isTrue({ range }: Slope): boolean {
    if (isZero(range)) return false;
    if (range[0] > 0 || range[1] < 0) return true;
    throw new Unprovable('a choice in the loop goes both ways within the bounds');
  }

  private less(a: Slope, b: Slope): boolean {
    if (a.range[1] < b.range[0]) return true;
    if (a.range[0] >= b.range[1]) return false;
    throw new Unprovable('a comparison in the loop goes both ways within the bounds');
  }

  private equals(a: Slope, b: Slope): boolean {
    const ends = [...a.range, ...b.range];
    if (ends.every((end) => end === ends[0])) return true;
    if (a.range[1] < b.range[0] || a.range[0] > b.range[1]) return false;
    throw new Unprovable('an equality in the loop goes both ways within the bounds');
  }

  private limited(x: Slope, low: Slope, high: Slope): Slope {
    if (this.less(x, low)) return low;
    return this.less(high, x) ? high : x;
  }

  private power(base: Slope, exponent: Slope): Slope {
    const [n] = exponent.range;
    if (n !== exponent.range[1] || !Number.isInteger(n) || Math.abs(n) > 16) {
      throw new Unprovable('a power in the loop has an exponent that is no small whole number');
    }
    let result = this.field.constant(1);
    for (let i = 0; i < Math.abs(n); i++) result = this.field.multiply(result, base);
    return n < 0 ? this.field.divide(this.field.constant(1), result) : result;
  }

  private call(name: OperationName, x: Slope): Slope {
    const { field } = this;
    if (isNothing(x) && zeroAtZero.has(name)) return field.constant(0);
    switch (name) {
      case 'abs':
        if (x.range[0] > 0) return x;
        if (x.range[1] < 0) return field.negate(x);
        break;
      case 'sign':
        if (x.range[0] > 0) return field.constant(1);
        if (x.range[1] < 0) return field.constant(-1);
        break;
      case 'sqrt':
        return field.apply(x, rising(Math.sqrt), ([low, high]) => slopeOfRoot(low, high));
      case 'exp':
        return field.apply(x, rising(Math.exp), rising(Math.exp));
      case 'ln':
        return field.apply(x, rising(Math.log), ([low, high]) =>
          low > 0 ? widened(1 / high, 1 / low) : everything,
        );
      case 'tanh':
        return field.apply(x, rising(Math.tanh), (at) => oneLessSquare(at));
      case 'sin':
        return field.apply(x, trigonometric(Math.sin), trigonometric(Math.cos));
      case 'cos':
        return field.apply(x, trigonometric(Math.cos), (at) => {
          const [low, high] = trigonometric(Math.sin)(at);
          return [-high, -low];
        });
    }
    throw new Unprovable(`'${name}' in the loop has no interval bounds here`);
  }
}

/** Functions that are exactly zero at zero. */
const zeroAtZero: ReadonlySet<OperationName> = new Set(['abs', 'sign', 'sqrt', 'sin', 'tanh']);

function rising(of: (x: number) => number): (x: Interval) => Interval {
  return ([low, high]) => widened(of(low), of(high));
}

function slopeOfRoot(low: number, high: number): Interval {
  return low > 0 ? widened(0.5 / Math.sqrt(high), 0.5 / Math.sqrt(low)) : everything;
}

/** 1 − tanh² falls from zero to both sides; the difference is kept when it is below the rounding of one. */
function oneLessSquare([low, high]: Interval): Interval {
  const at = (x: number): number => 1 / Math.cosh(x) ** 2;
  const far = size([low, high]);
  const near = low <= 0 && high >= 0 ? 0 : Math.min(Math.abs(low), Math.abs(high));
  return widened(at(far), at(near));
}

/** Bounds of a sine or cosine over an interval: it moves by no more than its argument, which serves for the narrow boxes that matter. */
export function trigonometric(of: (x: number) => number): (x: Interval) => Interval {
  return ([low, high]) => {
    const middle = low + (high - low) / 2;
    // The middle is rounded, and so is the half width.
    const half = (high - low) * 0.5 * (1 + 1e-15) + 4e-16 * size([low, high]);
    const [least, most] = widened(of(middle) - half, of(middle) + half);
    return [Math.max(-1, least - 1e-15), Math.min(1, most + 1e-15)];
  };
}
