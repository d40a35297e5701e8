import { inOrder, type Node, type OperationName } from './graph.js';
import type { Mode } from './loop.js';

/**
 * How an expression depends on what moves while nothing jumps: set by parameters; one of few values that jumps choose; another
 * value that stays between two instants (of inputs and held values); a sum of states and such values with factors of the
 * first two kinds; or otherwise.
 */
const dependences = ['constant', 'switched', 'staying', 'affine', 'other'] as const;
type Dependence = (typeof dependences)[number];

const comparisons: readonly OperationName[] = ['less', 'less_or_equal', 'equal', 'unequal', 'sign'];

/** Expressions as sums of states and of what stays, with factors that are the same between two jumps. */
export class AffineForm {
  /** What stays between two instants and is added to the states' terms: inputs, held values, and any function of them. */
  readonly sources: Node[];
  /** What the factors depend on beside parameters: relays, and comparisons of inputs and held values. */
  readonly switches: Node[];

  private constructor(
    private readonly roots: readonly Node[],
    private readonly known: ReadonlyMap<Node, Dependence>,
  ) {
    const [sources, switches] = [new Set<Node>(), new Set<Node>()];
    const switching = (node: Node): unknown => known.get(node) === 'switched' && switches.add(node);
    const seen = new Set<Node>();
    const visit = (node: Node): void => {
      if (seen.has(node)) return;
      seen.add(node);
      if (known.get(node) === 'affine') {
        if (node.kind === 'operation') for (const argument of node.of) visit(argument);
      } else if (!switching(node) && known.get(node) === 'staying') sources.add(node);
    };
    for (const root of roots) visit(root);
    this.sources = [...sources];
    this.switches = [...switches];
  }

  /**
   * The form of expressions, or undefined where they are none. A slope that is constant is not enough: a relay has slope zero
   * and is anything but linear, though between its jumps it is.
   */
  static of(roots: readonly Node[], modes: readonly Mode[]): AffineForm | undefined {
    const known = new Map<Node, Dependence>();
    for (const node of inOrder(roots)) known.set(node, dependence(node, known, modes));
    return roots.some((root) => known.get(root) === 'other') ? undefined : new AffineForm(roots, known);
  }

  /**
   * Tells every term of every expression: with which factor a state or a source is in it, or as which number a constant.
   * @param factorOf the value of what parameters and switches set.
   */
  terms(
    factorOf: (node: Node) => number,
    term: (root: number, of: Node | 'constant', factor: number) => void,
  ): void {
    const visit = (root: number, node: Node, factor: number): void => {
      const kind = this.known.get(node)!;
      if (kind === 'constant' || kind === 'switched') term(root, 'constant', factor * factorOf(node));
      else if (kind === 'staying' || node.kind !== 'operation') term(root, node, factor);
      else this.parts(node, factor, factorOf, (part, by) => visit(root, part, by));
    };
    this.roots.forEach((node, root) => {
      visit(root, node, 1);
    });
  }

  private parts(
    { name, of }: Extract<Node, { kind: 'operation' }>,
    factor: number,
    factorOf: (node: Node) => number,
    part: (node: Node, factor: number) => void,
  ): void {
    switch (name) {
      case 'add':
        part(of[0], factor);
        part(of[1], factor);
        break;
      case 'subtract':
        part(of[0], factor);
        part(of[1], -factor);
        break;
      case 'negate':
        part(of[0], -factor);
        break;
      case 'multiply':
        if (isFactor(this.known.get(of[0])!)) part(of[1], factor * factorOf(of[0]));
        else part(of[0], factor * factorOf(of[1]));
        break;
      case 'divide':
        part(of[0], factor / factorOf(of[1]));
        break;
      default:
        part(factorOf(of[0]) !== 0 ? of[1] : of[2], factor);
    }
  }
}

function dependence(node: Node, known: ReadonlyMap<Node, Dependence>, modes: readonly Mode[]): Dependence {
  if (node.kind === 'number') return 'constant';
  if (node.kind === 'leaf') return ofLeaf(node, modes);
  const of = node.of.map((argument) => known.get(argument)!);
  const most = dependences[Math.max(...of.map((one) => dependences.indexOf(one)))];
  if (most === 'staying') return comparisons.includes(node.name) ? 'switched' : 'staying';
  return most === 'affine' && !keepsAffine(node.name, of) ? 'other' : most;
}

function ofLeaf({ leaf, index }: Extract<Node, { kind: 'leaf' }>, modes: readonly Mode[]): Dependence {
  switch (leaf) {
    case 'parameter':
      return 'constant';
    case 'mode':
      return modes[index].taken === 'at_jumps' ? 'switched' : 'staying';
    case 'input':
    case 'held':
      return 'staying';
    case 'state':
      return 'affine';
    default:
      return 'other';
  }
}

/** Whether an operation on a sum of states is again one. */
function keepsAffine(name: OperationName, [a, b]: readonly Dependence[]): boolean {
  switch (name) {
    case 'add':
    case 'subtract':
    case 'negate':
      return true;
    case 'multiply':
      return isFactor(a) || isFactor(b);
    case 'divide':
      return isFactor(b);
    case 'choose':
      return isFactor(a);
    default:
      return false;
  }
}

function isFactor(of: Dependence): boolean {
  return of === 'constant' || of === 'switched';
}
