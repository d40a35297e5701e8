import type { Graph, Node, OperationName } from './graph.js';

/** What takes the place of an operation on arguments that are rewritten already; undefined leaves it as it is. */
export type Replacement = (name: OperationName, of: readonly Node[]) => Node | undefined;

/** Rewrites expressions in the same graph, each shared one once. */
export function rewriter(graph: Graph, replace: Replacement): (node: Node) => Node {
  const known = new Map<Node, Node>();
  const rewrite = (node: Node): Node => {
    if (node.kind !== 'operation') return node;
    const found = known.get(node);
    if (found) return found;
    const of = node.of.map(rewrite);
    const made = replace(node.name, of) ?? graph.apply(node.name, ...of);
    known.set(node, made);
    return made;
  };
  return rewrite;
}
