import type { Node } from '../graph.js';
import { LoopError } from '../loop.js';
import type { BlockUse, Workshop } from './block.js';

/** What each action takes. */
export interface PidInputs {
  error: Node;
  proportional: Node;
  derivative: Node;
  /** A signal at the last instant, kept only if something asks for it; at a bumpless start its present value. */
  last: (node: Node) => Node;
  /** 0 at the first instant after power-up; only where that matters. */
  started: Node | undefined;
}

/**
 * The inputs of a use of `pid`.
 * @throws {LoopError} where a weight is given, but target and measurement are not apart.
 */
export function pidInputs(use: BlockUse, workshop: Workshop): PidInputs {
  const { graph } = workshop.arithmetic;
  const error = use.input();
  const started =
    use.setting('bumpless_start') && workshop.addMemory(`${use.name} started`, () => graph.number(1), 0);
  const kept = new Map<Node, Node>();
  const last = (node: Node): Node => {
    const known = kept.get(node);
    if (known) return known;
    const memory = workshop.addMemory(`${use.name} last input`, () => node, 0);
    const value = started ? graph.apply('choose', started, memory, node) : memory;
    kept.set(node, value);
    return value;
  };
  return {
    error,
    proportional: weighted(use, workshop, 'target_weight', error),
    derivative: weighted(use, workshop, 'derivative_target_weight', error),
    last,
    started,
  };
}

function weighted(use: BlockUse, { arithmetic }: Workshop, name: string, error: Node): Node {
  const weight = use.setting(name);
  if (!weight) return error;
  if (!use.pair) {
    throw new LoopError(
      `pid of '${use.name}' has a ${name}, but 'of' is one signal; expected of: { target: …, measurement: … }`,
      use.place,
    );
  }
  return arithmetic.sum([
    { factor: weight, value: use.pair.target() },
    { value: use.pair.measurement(), minus: true },
  ]);
}
