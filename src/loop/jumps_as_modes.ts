import type { Workshop } from './blocks/block.js';
import { dependsOn, type Graph, type Node } from './graph.js';

/**
 * An expression of the plant in which everything that jumps or has a kink with the states stands for itself as a mode: a
 * comparison, a sign, a rounding, the end of a range. Its moment is then found, and between two such moments the expression is
 * smooth.
 * @param name of the signal, for the modes.
 */
export function jumpsAsModes(name: string, value: Node, graph: Graph, { addMode }: Workshop): Node {
  const known = new Map<Node, Node>();
  const modes = new Map<Node, Node>();
  const choose = (condition: Node, then: Node, otherwise: Node): Node =>
    graph.apply('choose', condition, then, otherwise);
  const switched = (jumping: Node): Node => {
    if (!dependsOn(jumping, ['state', 'mode'])) return jumping;
    const mode = modes.get(jumping) ?? addMode(`${name} branch`, 'at_jumps', () => jumping, 0);
    modes.set(jumping, mode);
    return mode;
  };
  const less = (a: Node, b: Node): Node => switched(graph.apply('less', a, b));
  const visit = (node: Node): Node => {
    if (node.kind !== 'operation') return node;
    const found = known.get(node) ?? made(node);
    known.set(node, found);
    return found;
  };
  const made = ({ name: operation, of }: Extract<Node, { kind: 'operation' }>): Node => {
    const [a, b, c] = of.map(visit);
    switch (operation) {
      case 'limit':
        return choose(less(a, b), b, choose(less(c, a), c, a));
      case 'max':
        return choose(less(a, b), b, a);
      case 'min':
        return choose(less(b, a), b, a);
      case 'abs':
        return choose(less(a, graph.number(0)), graph.apply('negate', a), a);
      case 'less':
      case 'less_or_equal':
      case 'equal':
      case 'unequal':
      case 'sign':
      case 'floor':
      case 'ceil':
      case 'round':
        return switched(graph.apply(operation, ...of.map(visit)));
      case 'quantise':
        return graph.apply('multiply', switched(graph.apply('round', graph.apply('divide', a, b))), b);
      default:
        return graph.apply(operation, ...of.map(visit));
    }
  };
  return visit(value);
}
