import type { Evaluation } from '../loop/evaluate.js';
import { dependsOn, type Node } from '../loop/graph.js';

/** Which arguments say where a fixed-point format begins and how large it is. */
const formatAt = { fit: [3, 4], fit_sum: [2, 3], fit_quotient: [3, 4] } as const;

/**
 * Where an expression has no derivative at a point: at the end of a range, in a relay, at the tip of an absolute value or
 * at the change from one branch to another. Only what counts at the point is looked at.
 * @returns words for the edge, or undefined where the expression is smooth.
 */
export function edgeOf(root: Node, evaluation: Evaluation): string | undefined {
  const seen = new Set<Node>();
  const visit = (node: Node): string | undefined => {
    if (node.kind === 'leaf' && node.leaf === 'mode') return 'a backlash or relay, which has no single slope';
    if (node.kind !== 'operation' || seen.has(node)) return undefined;
    seen.add(node);
    const own = ownEdge(node, evaluation);
    if (own && moves(node)) return own;
    for (const argument of counting(node, evaluation)) {
      const found = visit(argument);
      if (found) return found;
    }
    return undefined;
  };
  return visit(root);
}

/** What only parameters and inputs set stays on its side of an edge. */
function moves(node: Node): boolean {
  return dependsOn(node, ['state', 'mode', 'held', 'memory', 'reading', 'injected']);
}

/** The arguments whose values count: the condition and the chosen branch only. */
function counting(node: Extract<Node, { kind: 'operation' }>, evaluation: Evaluation): readonly Node[] {
  if (node.name !== 'choose') return node.of;
  return [node.of[0], evaluation.of(node.of[0]) !== 0 ? node.of[1] : node.of[2]];
}

function ownEdge(node: Extract<Node, { kind: 'operation' }>, evaluation: Evaluation): string | undefined {
  const [a, b, c] = node.of.map((argument) => (node.name === 'choose' ? 0 : evaluation.of(argument)));
  switch (node.name) {
    case 'limit':
      return a <= b || a >= c ? `the end of a range (${a} in ${b} … ${c})` : undefined;
    case 'fit':
    case 'fit_sum':
    case 'fit_quotient':
      return formatEdge(node, evaluation);
    case 'less':
    case 'less_or_equal':
    case 'equal':
    case 'unequal':
    case 'min':
    case 'max':
      return a === b ? `the change between two branches (both sides are ${a})` : undefined;
    case 'abs':
    case 'sign':
      return a === 0 ? 'a relay or an absolute value at zero' : undefined;
    case 'floor':
    case 'ceil':
    case 'round':
      return 'a step of rounding, which has no slope';
    default:
      return undefined;
  }
}

/** Past the ends of a number format a result is held at them, or wraps. */
function formatEdge(node: Extract<Node, { kind: 'operation' }>, evaluation: Evaluation): string | undefined {
  const [low, size] = formatAt[node.name as keyof typeof formatAt].map((at) => evaluation.of(node.of[at]));
  const x = evaluation.of(node);
  return x <= low || x >= low + size
    ? `the end of a number format (${x} in ${low} … ${low + size})`
    : undefined;
}
