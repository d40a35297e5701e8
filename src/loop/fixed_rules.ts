import type { FixedArithmetic } from '../spec/arithmetic.js';
import { overflows, roundings } from '../spec/fixed_formats.js';
import type { Graph, Node, OperationName } from './graph.js';
import { FormatMismatch, type NumberRules, type Term } from './number_rules.js';

type NumberNode = Extract<Node, { kind: 'number' }>;

/** Operations whose result is one of the numbers given, in the format as they are. */
const picking = new Set<OperationName>(['min', 'max', 'limit']);
/** Operations whose result is a truth or a sign, an int of C. */
const asking = new Set<OperationName>(['less', 'less_or_equal', 'equal', 'unequal', 'sign']);
/** Operations whose result is exact, but may lie outside the format. */
const turning = new Set<OperationName>(['negate', 'abs', 'floor', 'ceil', 'round']);

/** A factor may have a format of its own, of so many bits. */
const factorBits = 32;
/** Sums of less than so many of their smallest steps are exact in float64. */
const exactSteps = 2 ** 53;

/**
 * Fixed point: every number is a multiple of 2^-n in the stated width.
 * - A factor of a product may have a format of its own: the exact product is shifted once, with the stated rounding.
 * - A sum of one expression is kept in the accumulator, where there is one, with as many fractional bits as its finest
 *   product has, and is rounded into the format once. Without one every product and every sum is rounded by itself.
 * - A quotient is cut toward zero, as C's is.
 * - What is worked out of literal numbers alone is exact; its result must be a number of the format.
 */
export class FixedRules implements NumberRules {
  private readonly step: number;
  private readonly low: number;
  private readonly size: number;

  constructor(
    private readonly graph: Graph,
    private readonly format: FixedArithmetic,
  ) {
    this.step = 2 ** -format.fractionalBits;
    this.size = this.step * 2 ** format.bits;
    this.low = format.signed ? -this.size / 2 : 0;
  }

  take(node: Node): Node {
    const nearest = this.graph.apply('quantise', node, this.graph.number(this.step));
    if (node.kind !== 'number') {
      return this.graph.apply('limit', nearest, this.graph.number(this.low), this.graph.number(this.high));
    }
    return this.operand(node.stored ? node : nearest);
  }

  number(value: number): Node {
    return this.graph.number(value);
  }

  apply(name: OperationName, of: readonly Node[]): Node {
    if (of.every(isLiteral)) return this.graph.apply(name, ...of);
    if (name === 'multiply') return this.sum([{ factor: of[0], value: of[1] }]);
    if (name === 'divide') return this.divide(of[0], of[1]);
    if (name === 'add') return this.sum([{ value: of[0] }, { value: of[1] }]);
    if (name === 'subtract') return this.sum([{ value: of[0] }, { value: of[1], minus: true }]);
    if (name === 'choose') return this.graph.apply(name, of[0], this.operand(of[1]), this.operand(of[2]));
    const given = of.map((node) => this.operand(node));
    if (picking.has(name) || asking.has(name)) return this.graph.apply(name, ...given);
    if (turning.has(name)) return this.fitted(this.graph.apply(name, ...given));
    throw new FormatMismatch(
      `'${name}' is not defined in ${this.format.format}: write what the firmware does, with products and tables`,
    );
  }

  divide(a: Node, b: Node): Node {
    if (isLiteral(a) && isLiteral(b)) return this.graph.apply('divide', a, b);
    return this.graph.apply(
      'fit_quotient',
      this.factor(a),
      this.factor(b),
      ...this.numbers(this.step),
      ...this.ends(),
    );
  }

  sum(terms: readonly Term[]): Node {
    if (terms.every(({ factor, value }) => isLiteral(value) && (!factor || isLiteral(factor)))) {
      return this.plainSum(terms);
    }
    if (terms.length === 1 && !terms[0].factor) return this.signed(terms[0]);
    if (this.format.accumulator !== undefined || terms.length === 1) return this.accumulated(terms);
    return terms
      .slice(1)
      .reduce(
        (sum, term) =>
          this.fitted(
            this.graph.apply(term.minus ? 'subtract' : 'add', sum, this.signed({ ...term, minus: false })),
          ),
        this.signed(terms[0]),
      );
  }

  keep(node: Node): Node {
    return this.operand(node);
  }

  private get high(): number {
    return this.low + this.size - this.step;
  }

  private signed({ factor, value, minus }: Term): Node {
    const node = factor ? this.sum([{ factor, value }]) : this.operand(value);
    return minus ? this.apply('negate', [node]) : node;
  }

  private accumulated(terms: readonly Term[]): Node {
    const pairs = terms.map(({ factor, value, minus }): [Node, Node] => {
      const one = factor ? this.factor(factor) : this.graph.number(1);
      return [
        minus ? this.graph.apply('negate', one) : one,
        factor ? this.factor(value) : this.operand(value),
      ];
    });
    const units = terms.map(({ factor, value }) =>
      factor ? this.unitOf(factor) * this.unitOf(value) : this.step,
    );
    const unit = Math.min(...units);
    const largest = pairs.reduce((sum, [one, other]) => sum + this.largest(one) * this.largest(other), 0);
    const size = this.format.accumulator === undefined ? 0 : unit * 2 ** this.format.accumulator;
    const low = this.format.signed ? -size / 2 : 0;
    const fits =
      size === 0 || (largest < low + size && (this.format.signed || terms.every(({ minus }) => !minus)));
    if (fits && largest <= exactSteps * unit) return this.fitted(this.plainSum(terms));
    return this.graph.apply(
      'fit_sum',
      ...this.numbers(this.step, roundings.indexOf(this.format.rounding)),
      ...this.ends(),
      ...this.numbers(unit, low, size),
      ...pairs.flat(),
    );
  }

  private plainSum([first, ...others]: readonly Term[]): Node {
    const plain = ({ factor, value }: Term): Node =>
      factor ? this.graph.apply('multiply', factor, value) : value;
    return others.reduce(
      (sum, term) => this.graph.apply(term.minus ? 'subtract' : 'add', sum, plain(term)),
      first.minus ? this.graph.apply('negate', plain(first)) : plain(first),
    );
  }

  private fitted(node: Node): Node {
    const rounding = roundings.indexOf(this.format.rounding);
    return this.graph.apply('fit', node, ...this.numbers(this.step, rounding), ...this.ends());
  }

  private ends(): Node[] {
    return this.numbers(this.low, this.size, overflows.indexOf(this.format.overflow));
  }

  private numbers(...values: number[]): Node[] {
    return values.map((value) => this.graph.number(value));
  }

  /** A number among signals must be one of the format's; a truth or a sign is made one. @throws FormatMismatch */
  private operand(node: Node): Node {
    if (node.kind === 'operation' && asking.has(node.name)) return this.fitted(node);
    if (node.kind !== 'number' || this.holds(node.value)) return node;
    throw new FormatMismatch(this.misfit(node), node.stored?.place);
  }

  /** A factor may be a number of another fixed-point format. @throws FormatMismatch */
  private factor(node: Node): Node {
    if (node.kind !== 'number' || this.holds(node.value)) return node;
    const isFloat = node.stored?.format !== undefined && node.stored.fractionalBits === undefined;
    const steps = Math.abs(node.value) / this.unitOf(node);
    if (!isFloat && Number.isInteger(steps) && steps <= 2 ** factorBits) return node;
    throw new FormatMismatch(this.misfit(node), node.stored?.place);
  }

  private holds(value: number): boolean {
    return value >= this.low && value <= this.high && Number.isInteger(value / this.step);
  }

  /** The value of a number's last bit: as stored, as in the format where it fits, or as few bits as it needs. */
  private unitOf(node: Node): number {
    if (node.kind !== 'number') return this.step;
    if (node.stored?.fractionalBits !== undefined) return 2 ** -node.stored.fractionalBits;
    if (this.holds(node.value)) return this.step;
    let unit = 1;
    while (!Number.isInteger(node.value / unit) && unit > 2 ** -62) unit /= 2;
    return unit;
  }

  private largest(node: Node): number {
    return node.kind === 'number' ? Math.abs(node.value) : Math.max(1, -this.low, this.high);
  }

  private misfit({ value, stored }: NumberNode): string {
    const { format } = this.format;
    const what = stored
      ? `coefficient '${stored.name}' is ${value}${stored.format ? ` (${stored.format})` : ''}, which`
      : `${value}`;
    if (!(value >= this.low && value <= this.high)) {
      return `${what} is outside ${format}: its numbers go from ${this.low} to ${this.high}`;
    }
    const below = Math.floor(value / this.step) * this.step;
    return `${what} is no number of ${format}: its nearest are ${below} and ${below + this.step}`;
  }
}

function isLiteral(node: Node): boolean {
  return node.kind === 'number' && node.stored === undefined;
}
