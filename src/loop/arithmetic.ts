import type { Arithmetic } from '../spec/spec.js';
import type { Graph, Node, OperationName } from './graph.js';

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

/** Builds expressions as the target computes them: under `float32` every operation rounds to the nearest float32. */
export class TargetArithmetic {
  constructor(
    readonly graph: Graph,
    readonly format: Arithmetic,
  ) {}

  /** A number from outside brought into the target's format. */
  take(node: Node): Node {
    return this.format === 'float32' ? this.graph.apply('single', node) : node;
  }

  number(value: number): Node {
    return this.take(this.graph.number(value));
  }

  apply(name: OperationName, ...of: Node[]): Node {
    const result = this.graph.apply(name, ...of);
    return exactOperations.has(name) ? result : this.take(result);
  }

  add(a: Node, b: Node): Node {
    return this.apply('add', a, b);
  }

  subtract(a: Node, b: Node): Node {
    return this.apply('subtract', a, b);
  }

  multiply(a: Node, b: Node): Node {
    return this.apply('multiply', a, b);
  }

  divide(a: Node, b: Node): Node {
    return this.apply('divide', a, b);
  }
}
