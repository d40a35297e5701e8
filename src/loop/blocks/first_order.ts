import type { SettingDescription } from '../../spec/vocabulary.js';
import type { Graph, Node } from '../graph.js';
import type { Workshop } from './block.js';

/** How a first-order lag becomes a difference equation. */
export type LagRule = 'backward' | 'forward' | 'trapezoid' | 'exact';

/** The setting that chooses a rule. */
export const lagRuleSetting: SettingDescription = {
  name: 'sum_by',
  kind: 'word',
  words: ['backward', 'forward', 'trapezoid', 'exact'],
  optional: true,
  meaning:
    'summation rule of the lag; exact is that of an input which is held between instants; backward by default',
};

/**
 * A lag of gain one as a difference equation; c is formed in double precision and rounded once (Franklin, Powell and
 * Workman, 'Digital Control of Dynamic Systems', 1998, from memory). τ is the time constant, T the period:
 *
 *     y = y₁ + c·(x − y₁)                c = T/(τ + T)          backward
 *     y = y₁ + c·(x₁ − y₁)               c = T/τ                forward
 *     y = y₁ + c·((x + x₁)·0.5 − y₁)     c = T/(τ + T/2)        trapezoid
 *     y = y₁ + c·(x₁ − y₁)               c = 1 − e^(−T/τ)       exact
 *
 * @param timeConstant in s, in double precision.
 */
export function sampledLag(
  name: string,
  input: Node,
  timeConstant: Node,
  rule: LagRule,
  workshop: Workshop,
): Node {
  const { arithmetic, addMemory } = workshop;
  const share = arithmetic.take(shareOf(timeConstant, rule, workshop));
  const last = (): Node => addMemory(`${name} last input`, () => input);
  switch (rule) {
    case 'backward':
      return approach(name, input, share, workshop);
    case 'forward':
    case 'exact':
      return approach(name, last(), share, workshop);
    case 'trapezoid': {
      const middle = arithmetic.multiply(arithmetic.add(input, last()), arithmetic.number(0.5));
      return approach(name, middle, share, workshop);
    }
  }
}

/** y = y₁ + share·(x − y₁). */
export function approach(name: string, input: Node, share: Node, { arithmetic, addMemory }: Workshop): Node {
  const last: Node = addMemory(`${name} last output`, () => output);
  const output = arithmetic.add(last, arithmetic.multiply(share, arithmetic.subtract(input, last)));
  return output;
}

function shareOf(timeConstant: Node, rule: LagRule, { arithmetic, exactPeriod }: Workshop): Node {
  const { graph } = arithmetic;
  const period = exactPeriod();
  switch (rule) {
    case 'backward':
      return graph.apply('divide', period, graph.apply('add', timeConstant, period));
    case 'forward':
      return graph.apply('divide', period, timeConstant);
    case 'trapezoid': {
      const half = graph.apply('multiply', period, graph.number(0.5));
      return graph.apply('divide', period, graph.apply('add', timeConstant, half));
    }
    case 'exact': {
      const t = halfTangent(timeConstant, period, graph);
      const twice = graph.apply('multiply', graph.number(2), t);
      return graph.apply('divide', twice, graph.apply('add', graph.number(1), t));
    }
  }
}

/** tanh(T/(2τ)): of this t, e^(−T/τ) is (1 − t)/(1 + t) and 1 − e^(−T/τ) is 2t/(1 + t), without cancellation. */
export function halfTangent(timeConstant: Node, period: Node, graph: Graph): Node {
  const turns = graph.apply('divide', period, timeConstant);
  return graph.apply('tanh', graph.apply('multiply', turns, graph.number(0.5)));
}
