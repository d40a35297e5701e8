import { firstTerm, type Graph, type Node, type OperationName } from './graph.js';

/**
 * Exact partial derivatives of expressions, as expressions in the same graph.
 * Quanta and number formats count as gain one, a range as gain one inside and zero outside; floor, ceil and sign as zero.
 */
export class Derivative {
  private readonly known = new Map<string, Node>();
  private readonly zero: Node;
  private readonly one: Node;

  constructor(private readonly graph: Graph) {
    this.zero = graph.number(0);
    this.one = graph.number(1);
  }

  /** Derivative of the expression with respect to one leaf. */
  of(node: Node, leaf: Node): Node {
    if (node === leaf) return this.one;
    if (node.kind !== 'operation') return this.zero;
    const key = `${node.id},${leaf.id}`;
    const found = this.known.get(key);
    if (found) return found;
    const result = this.operation(node.name, node, node.of, leaf);
    this.known.set(key, result);
    return result;
  }

  private sum(a: Node, b: Node): Node {
    if (a === this.zero) return b;
    return b === this.zero ? a : this.graph.apply('add', a, b);
  }

  private difference(a: Node, b: Node): Node {
    if (b === this.zero) return a;
    return a === this.zero ? this.graph.apply('negate', b) : this.graph.apply('subtract', a, b);
  }

  private product(a: Node, b: Node): Node {
    if (a === this.zero || b === this.zero) return this.zero;
    if (a === this.one) return b;
    return b === this.one ? a : this.graph.apply('multiply', a, b);
  }

  private choice(condition: Node, then: Node, otherwise: Node): Node {
    return then === otherwise ? then : this.graph.apply('choose', condition, then, otherwise);
  }

  private operation(name: OperationName, node: Node, of: readonly Node[], leaf: Node): Node {
    const [a, b, c] = of;
    const d = of.map((argument) => this.of(argument, leaf));
    switch (name) {
      case 'add':
        return this.sum(d[0], d[1]);
      case 'subtract':
        return this.difference(d[0], d[1]);
      case 'multiply':
        return this.ofProducts(of, d);
      case 'divide':
        return this.ofQuotient(node, b, d);
      case 'power':
        return this.ofPower(node, a, b, d);
      case 'negate':
        return d[0] === this.zero ? this.zero : this.graph.apply('negate', d[0]);
      case 'choose':
        return this.choice(a, d[1], d[2]);
      case 'limit':
        return this.choice(
          this.graph.apply('less', a, b),
          d[1],
          this.choice(this.graph.apply('less', c, a), d[2], d[0]),
        );
      case 'min':
        return this.choice(this.graph.apply('less', b, a), d[1], d[0]);
      case 'max':
        return this.choice(this.graph.apply('less', a, b), d[1], d[0]);
      case 'hypot':
        return this.sum(
          this.product(this.graph.apply('divide', a, node), d[0]),
          b === undefined ? this.zero : this.product(this.graph.apply('divide', b, node), d[1]),
        );
      case 'quantise':
      case 'single':
      case 'fit':
        return d[0];
      case 'fused_multiply_add':
        return this.sum(this.ofProducts(of.slice(0, 2), d), d[2]);
      case 'fit_sum':
        return this.ofProducts(of.slice(firstTerm), d.slice(firstTerm));
      case 'fit_quotient':
        return this.ofQuotient(this.graph.apply('divide', a, b), b, d);
      default:
        return this.product(this.slope(name, node, a), d[0]);
    }
  }

  /** Of the sum of products of neighbours. */
  private ofProducts(of: readonly Node[], d: readonly Node[]): Node {
    let sum = this.zero;
    for (let at = 0; at < of.length; at += 2) {
      const product = this.sum(this.product(d[at], of[at + 1]), this.product(of[at], d[at + 1]));
      sum = this.sum(sum, product);
    }
    return sum;
  }

  /** d(a/b) = (da − (a/b)·db)/b */
  private ofQuotient(quotient: Node, b: Node, d: readonly Node[]): Node {
    const numerator = this.difference(d[0], this.product(quotient, d[1]));
    return numerator === this.zero ? this.zero : this.graph.apply('divide', numerator, b);
  }

  /** d(a^b) = a^(b−1)·(b·da) + a^b·ln(a)·db, each part only where it is needed. */
  private ofPower(node: Node, a: Node, b: Node, d: Node[]): Node {
    const { graph } = this;
    const reduced = graph.apply('power', a, graph.apply('subtract', b, this.one));
    const fromBase = this.product(this.product(b, reduced), d[0]);
    const fromExponent =
      d[1] === this.zero ? this.zero : this.product(this.product(node, graph.apply('ln', a)), d[1]);
    return this.sum(fromBase, fromExponent);
  }

  /** Slope of a function of one argument at a; `node` is the function's value. */
  private slope(name: OperationName, node: Node, a: Node): Node {
    const { graph, one } = this;
    const square = (x: Node): Node => graph.apply('multiply', x, x);
    const over = (x: Node): Node => graph.apply('divide', one, x);
    switch (name) {
      case 'abs':
        return graph.apply('sign', a);
      case 'sqrt':
        return graph.apply('divide', graph.number(0.5), node);
      case 'exp':
        return node;
      case 'ln':
        return over(a);
      case 'sin':
        return graph.apply('cos', a);
      case 'cos':
        return graph.apply('negate', graph.apply('sin', a));
      case 'tan':
        return graph.apply('add', one, square(node));
      case 'asin':
        return over(graph.apply('sqrt', graph.apply('subtract', one, square(a))));
      case 'acos':
        return graph.apply('negate', over(graph.apply('sqrt', graph.apply('subtract', one, square(a)))));
      case 'atan':
        return over(graph.apply('add', one, square(a)));
      case 'sinh':
        return graph.apply('cosh', a);
      case 'cosh':
        return graph.apply('sinh', a);
      case 'tanh':
        return graph.apply('subtract', one, square(node));
      default:
        return this.zero;
    }
  }
}
