import type { Workshop } from './blocks/block.js';
import { dependsOn, type Graph, type Node } from './graph.js';
import { rewriter } from './rewritten.js';

/**
 * An expression of the plant in which everything that jumps or has a kink with the states stands for itself as a mode: a
 * comparison, a sign, a rounding, the end of a range. Its moment is then found, and between two such moments the expression is
 * smooth.
 * @param name of the signal, for the modes.
 */
export function jumpsAsModes(name: string, value: Node, graph: Graph, { addMode }: Workshop): Node {
  const modes = new Map<Node, Node>();
  const switched = (jumping: Node): Node => {
    if (!dependsOn(jumping, ['state', 'mode'])) return jumping;
    const mode = modes.get(jumping) ?? addMode(`${name} branch`, 'at_jumps', () => jumping, 0);
    modes.set(jumping, mode);
    return mode;
  };
  const less = (a: Node, b: Node, then: Node, otherwise: Node): Node =>
    graph.apply('choose', switched(graph.apply('less', a, b)), then, otherwise);
  const smooth = rewriter(graph, (operation, of) => {
    const [a, b, c] = of;
    switch (operation) {
      case 'limit':
        return less(a, b, b, less(c, a, c, a));
      case 'max':
        return less(a, b, b, a);
      case 'min':
        return less(b, a, b, a);
      case 'abs':
        return less(a, graph.number(0), graph.apply('negate', a), a);
      case 'less':
      case 'less_or_equal':
      case 'equal':
      case 'unequal':
      case 'sign':
      case 'floor':
      case 'ceil':
      case 'round':
        return switched(graph.apply(operation, ...of));
      case 'quantise':
        return graph.apply('multiply', switched(graph.apply('round', graph.apply('divide', a, b))), b);
      default:
        return undefined;
    }
  });
  return smooth(value);
}
