import { Derivative } from './derivative.js';
import type { Graph, Node } from './graph.js';
import type { ContinuousState } from './loop.js';

/** Rate of an expression along the motion of the states, all else constant; per second. */
export function rateOf(graph: Graph, states: readonly ContinuousState[], value: Node): Node {
  const derivative = new Derivative(graph);
  const zero = graph.number(0);
  const one = graph.number(1);
  return states.reduce((sum, state, i) => {
    const slope = derivative.of(value, graph.leaf('state', i));
    if (slope === zero) return sum;
    const part = slope === one ? state.derivative : graph.apply('multiply', slope, state.derivative);
    return sum === zero ? part : graph.apply('add', sum, part);
  }, zero);
}
