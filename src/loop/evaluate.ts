import { type LeafKind, type Node, operations, unrounded } from './graph.js';

/** Numbers for the leaves, by kind and index; a kind that is not given counts as all zero. */
export type LeafValues = Partial<Record<LeafKind, ArrayLike<number>>>;

/**
 * Evaluates expressions one after another on the same leaf values. Only what is needed is evaluated, so that the branch
 * which a condition leaves out can be anything. `rounding: 'off'` takes quanta and number formats as gain one, which
 * the point of rest and the linear analysis ask for.
 */
export class Evaluation {
  private readonly known = new Map<Node, number>();

  constructor(
    private readonly leaves: LeafValues,
    private readonly rounding: 'on' | 'off' = 'on',
  ) {}

  of(node: Node): number {
    if (node.kind === 'number') return node.value;
    const found = this.known.get(node);
    if (found !== undefined) return found;
    const value = node.kind === 'leaf' ? (this.leaves[node.leaf]?.[node.index] ?? 0) : this.operation(node);
    this.known.set(node, value);
    return value;
  }

  private operation(node: Extract<Node, { kind: 'operation' }>): number {
    if (node.name === 'choose') return this.of(node.of[0]) !== 0 ? this.of(node.of[1]) : this.of(node.of[2]);
    const operate = (this.rounding === 'off' && unrounded[node.name]) || operations[node.name];
    const [a, b, c] = node.of;
    if (b === undefined) return operate(this.of(a));
    if (c === undefined) return operate(this.of(a), this.of(b));
    if (node.of.length === 3) return operate(this.of(a), this.of(b), this.of(c));
    return operate(...node.of.map((one) => this.of(one)));
  }
}
