import { inOrder, type LeafKind, type Node } from './graph.js';

/** How an expression depends on what moves: not at all, as a sum of it with constant factors, or otherwise. */
type Dependence = 'constant' | 'affine' | 'other';

const moving: readonly LeafKind[] = ['state', 'held', 'input'];

/**
 * Whether every expression is a sum of states, held values and inputs with factors that only parameters set. A slope that is
 * constant is not enough: a relay has slope zero and is anything but linear.
 */
export function allAffine(roots: readonly Node[]): boolean {
  const known = new Map<Node, Dependence>();
  for (const node of inOrder(roots)) known.set(node, dependence(node, known));
  return roots.every((root) => known.get(root) !== 'other');
}

function dependence(node: Node, known: ReadonlyMap<Node, Dependence>): Dependence {
  if (node.kind === 'number') return 'constant';
  if (node.kind === 'leaf') {
    if (node.leaf === 'parameter') return 'constant';
    return moving.includes(node.leaf) ? 'affine' : 'other';
  }
  const of = node.of.map((argument) => known.get(argument)!);
  if (of.every((one) => one === 'constant')) return 'constant';
  if (of.includes('other')) return 'other';
  switch (node.name) {
    case 'add':
    case 'subtract':
    case 'negate':
      return 'affine';
    case 'multiply':
      return of.includes('constant') ? 'affine' : 'other';
    case 'divide':
      return of[1] === 'constant' ? 'affine' : 'other';
    case 'choose':
      return of[0] === 'constant' ? 'affine' : 'other';
    default:
      return 'other';
  }
}
