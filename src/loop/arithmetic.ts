import type { Arithmetic } from '../spec/arithmetic.js';
import { FixedRules } from './fixed_rules.js';
import { FloatRules } from './float_rules.js';
import type { Graph, Node, OperationName, StoredNumber } from './graph.js';
import type { NumberRules, Term } from './number_rules.js';

/** Builds expressions as the target computes them: every operation gives a number of the target's format. */
export class TargetArithmetic {
  private readonly rules: NumberRules;

  constructor(
    readonly graph: Graph,
    readonly format: Arithmetic,
  ) {
    this.rules = typeof format === 'string' ? new FloatRules(graph, format) : new FixedRules(graph, format);
  }

  /** A number from outside brought into the target's format, to the nearest one; in fixed point it is kept in its range. */
  take(node: Node): Node {
    return this.rules.take(node);
  }

  /** A number that stands in the firmware's source. */
  number(value: number): Node {
    return this.rules.number(value);
  }

  /** A number that the build holds. */
  coefficient(value: number, stored: StoredNumber): Node {
    return typeof this.format === 'string' ? this.number(value) : this.graph.stored(value, stored);
  }

  /** What a signal keeps of a value. */
  keep(node: Node): Node {
    return this.rules.keep(node);
  }

  apply(name: OperationName, ...of: Node[]): Node {
    return this.rules.apply(name, of);
  }

  add(a: Node, b: Node): Node {
    return this.rules.apply('add', [a, b]);
  }

  subtract(a: Node, b: Node): Node {
    return this.rules.apply('subtract', [a, b]);
  }

  multiply(a: Node, b: Node): Node {
    return this.rules.apply('multiply', [a, b]);
  }

  divide(a: Node, b: Node): Node {
    return this.rules.divide(a, b);
  }

  /**
   * Values and products summed from left to right, as one expression of the firmware's source: `float32_fused` takes each
   * product in one operation with its addition, fixed point keeps the sum in its accumulator and rounds once at the end.
   */
  sum(terms: readonly Term[]): Node {
    return this.rules.sum(terms);
  }

  /**
   * factors₀·values₀ + factors₁·values₁ + … as `sum` does it.
   * @param from what the sum starts with; a loop that adds up from zero starts with the number 0.
   */
  sumOfProducts(factors: readonly Node[], values: readonly Node[], from?: Node): Node {
    const products = factors.map((factor, at): Term => ({ factor, value: values[at] }));
    return this.rules.sum(from === undefined ? products : [{ value: from }, ...products]);
  }
}
