import type { FloatArithmetic } from '../spec/arithmetic.js';
import type { Graph, Node, OperationName } from './graph.js';
import type { NumberRules, Term } from './number_rules.js';

/** Operations which only pick or turn a number, and so give a number of the same format. */
const exactOperations = new Set<OperationName>([
  'negate',
  'abs',
  'choose',
  'limit',
  'less',
  'less_or_equal',
  'equal',
  'unequal',
  'min',
  'max',
  'sign',
]);

/**
 * Floating point. Under `float32` every operation rounds to the nearest float32. Under `float32_fused` a sum takes its products
 * in one operation with the addition, as GCC and Clang do with `-ffp-contract=fast` on a target that has the instruction: from
 * left to right, x·y + z, z + x·y, x·y − z and z − x·y each round once; where both are products the left one is fused and the
 * right one rounds first.
 */
export class FloatRules implements NumberRules {
  constructor(
    private readonly graph: Graph,
    private readonly format: FloatArithmetic,
  ) {}

  take(node: Node): Node {
    return this.format === 'float64' ? node : this.graph.apply('single', node);
  }

  keep(node: Node): Node {
    return node;
  }

  number(value: number): Node {
    return this.take(this.graph.number(value));
  }

  apply(name: OperationName, of: readonly Node[]): Node {
    const result = this.graph.apply(name, ...of);
    return exactOperations.has(name) ? result : this.take(result);
  }

  divide(a: Node, b: Node): Node {
    return this.apply('divide', [a, b]);
  }

  sum([first, second, ...others]: readonly Term[]): Node {
    if (second === undefined) return this.valueOf(first);
    return others.reduce((sum, term) => this.plus(sum, term), this.ofTwo(first, second));
  }

  private ofTwo(first: Term, second: Term): Node {
    if (this.format !== 'float32_fused' || first.factor === undefined) {
      return this.plus(this.valueOf(first), second);
    }
    const right = this.product(second);
    return this.fused(first, second.minus ? this.graph.apply('negate', right) : right);
  }

  private plus(sum: Node, term: Term): Node {
    if (this.format === 'float32_fused' && term.factor !== undefined) return this.fused(term, sum);
    return this.apply(term.minus ? 'subtract' : 'add', [sum, this.product(term)]);
  }

  private fused({ factor, value, minus }: Term, sum: Node): Node {
    const signed = minus ? this.graph.apply('negate', factor!) : factor!;
    return this.graph.apply('fused_multiply_add', signed, value, sum);
  }

  private product({ factor, value }: Term): Node {
    return factor === undefined ? value : this.apply('multiply', [factor, value]);
  }

  private valueOf(term: Term): Node {
    return term.minus ? this.graph.apply('negate', this.product(term)) : this.product(term);
  }
}
