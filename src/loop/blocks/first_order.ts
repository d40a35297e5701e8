import type { SettingDescription } from '../../spec/vocabulary.js';
import type { Graph, Node } from '../graph.js';
import { LoopError } from '../loop.js';
import type { BlockUse, Workshop } from './block.js';

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

/** The setting that bends the trapezoid rule. */
export const exactAtSetting: SettingDescription = {
  name: 'exact_at',
  kind: 'corner',
  optional: true,
  meaning:
    'frequency ω at which the trapezoid rule has the response of the continuous lag: 2·tan(ω·T/2)/ω stands for T in c',
};

/** A lag as a spec gives it, in double precision. */
export interface LagSettings {
  /** In s. */
  timeConstant: Node;
  rule: LagRule;
  /** In rad/s. */
  exactAt: Node | undefined;
}

/**
 * A lag by one of a block's settings and its rule.
 * @throws {LoopError} where `exact_at` stands beside another rule than the trapezoid.
 */
export function lagSettings(use: BlockUse, name: string): LagSettings {
  const rule = (use.word('sum_by') ?? 'backward') as LagRule;
  const exactAt = use.design('exact_at');
  if (exactAt && rule !== 'trapezoid') {
    throw new LoopError(
      `'${use.name}' has exact_at with sum_by: ${rule}; it bends the trapezoid rule alone`,
      use.place,
    );
  }
  return { timeConstant: use.design(name)!, rule, exactAt };
}

/**
 * A lag of gain one as a difference equation; c is formed in double precision and rounded once (Franklin, Powell and
 * Workman, 'Digital Control of Dynamic Systems', 1998, from memory). τ is the time constant, T the period:
 *
 *     y = y₁ + c·(x − y₁)                c = T/(τ + T)          backward
 *     y = y₁ + c·(x₁ − y₁)               c = T/τ                forward
 *     y = y₁ + c·((x + x₁)·0.5 − y₁)     c = T/(τ + T/2)        trapezoid
 *     y = y₁ + c·(x₁ − y₁)               c = 1 − e^(−T/τ)       exact
 */
export function sampledLag(name: string, input: Node, lag: LagSettings, workshop: Workshop): Node {
  const { arithmetic, addMemory } = workshop;
  const share = arithmetic.take(shareOf(lag, workshop));
  const last = (): Node => addMemory(`${name} last input`, () => input);
  switch (lag.rule) {
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
  const output = arithmetic.sumOfProducts([share], [arithmetic.subtract(input, last)], last);
  return output;
}

function shareOf({ timeConstant, rule, exactAt }: LagSettings, { arithmetic, exactPeriod }: Workshop): Node {
  const { graph } = arithmetic;
  const period = exactPeriod();
  switch (rule) {
    case 'backward':
      return graph.apply('divide', period, graph.apply('add', timeConstant, period));
    case 'forward':
      return graph.apply('divide', period, timeConstant);
    case 'trapezoid': {
      const bent = exactAt ? bentPeriod(exactAt, period, graph) : period;
      const half = graph.apply('multiply', bent, graph.number(0.5));
      return graph.apply('divide', bent, graph.apply('add', timeConstant, half));
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

function bentPeriod(exactAt: Node, period: Node, graph: Graph): Node {
  const half = graph.apply('divide', graph.apply('multiply', exactAt, period), graph.number(2));
  return graph.apply('divide', graph.apply('multiply', graph.number(2), graph.apply('tan', half)), exactAt);
}
