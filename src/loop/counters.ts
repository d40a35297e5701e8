import type { ControllerDefinition } from '../spec/spec.js';
import type { ControllerRoom } from './controller_room.js';
import { counting } from './fixed_point.js';
import { type Graph, inOrder, type Node, type OperationName } from './graph.js';
import type { Counter, TracedSignal } from './loop.js';
import type { Parts } from './parts.js';

/** Which argument of an operation in fixed point is its rule for overflows. */
const overflowAt: Partial<Record<OperationName, number>> = { fit: 5, fit_sum: 4, fit_quotient: 5 };

/** What can be counted of a controller: how often, at one instant, an operation does so. */
const countable: Record<string, (graph: Graph, node: Node) => Node | undefined> = {
  overflows: overflowsOf,
  'limit hits': limitHitsOf,
};

/** The name of the traced signal with a controller's count since the start; no signal of a spec has blanks in its name. */
export function countOf(what: 'overflows' | 'limit hits', controller: string): string {
  return `${what} of ${controller}`;
}

/**
 * Counts of what happens in controllers, and the signals that show them. `overflows`: results outside the number format,
 * before they saturate or wrap, sums in the accumulator included. `limit hits`: values that a range holds at one of its ends,
 * or inputs that their number format does; readings are held before the controller sees them and do not count.
 * An operation counts once an instant, also where a condition leaves its result out.
 */
export function countersOf(
  controllers: readonly ControllerDefinition[],
  parts: Parts,
  room: ControllerRoom,
): { counters: Counter[]; signals: [string, TracedSignal][] } {
  const { graph } = parts;
  const counters: Counter[] = [];
  const signals: [string, TracedSignal][] = [];
  for (const [task, controller] of controllers.entries()) {
    const roots = [
      ...controller.signals.map(({ name }) => room.signal(name)),
      ...parts.memories.filter((memory) => memory.task === task).map(({ next }) => next),
    ];
    const operations = inOrder(roots);
    for (const what of Object.keys(countable) as Parameters<typeof countOf>[0][]) {
      const counts = operations.flatMap((node) => countable[what](graph, node) ?? []);
      const next = counts.reduce(
        (sum, count) => graph.apply('add', sum, count),
        graph.leaf('counter', counters.length),
      );
      const name = countOf(what, controller.name);
      counters.push({ name, task, next });
      signals.push([name, { kind: 'sampled', task, value: next, range: undefined }]);
    }
  }
  return { counters, signals };
}

function overflowsOf(graph: Graph, node: Node): Node | undefined {
  const at = node.kind === 'operation' ? overflowAt[node.name] : undefined;
  if (node.kind !== 'operation' || at === undefined) return undefined;
  const rule = (node.of[at] as Extract<Node, { kind: 'number' }>).value;
  return graph.apply(node.name, ...node.of.with(at, graph.number(rule + counting)));
}

function limitHitsOf(graph: Graph, node: Node): Node | undefined {
  if (node.kind !== 'operation' || node.name !== 'limit') return undefined;
  const [x, low, high] = node.of;
  return graph.apply('add', graph.apply('less', x, low), graph.apply('less', high, x));
}
