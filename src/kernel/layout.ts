import type { LeafKind } from '../loop/graph.js';
import type { Loop } from '../loop/loop.js';

/** Where each kind of leaf lies in the one array that holds everything a running plant knows. */
export type Layout = Record<Exclude<LeafKind, 'injected'>, number> & {
  /** Results of the computing tasks, before they are delivered; in the order of `held`. */
  pending: number;
  /** Traced sampled signals as last computed. */
  latest: number;
  length: number;
};

/** Lays out the array for a loop of which so many sampled signals are traced. */
export function layOut(loop: Loop, tracedSampled: number): Layout {
  const lengths = {
    parameter: loop.parameters.length,
    input: loop.inputs.length,
    state: loop.states.length,
    mode: loop.modes.length,
    held: loop.held.length,
    memory: loop.memories.length,
    counter: loop.counters.length,
    reading: loop.readings.length,
    noise: loop.noises.length,
    pending: loop.held.length,
    latest: tracedSampled,
  };
  let length = 0;
  const layout: Partial<Layout> = {};
  for (const [kind, count] of Object.entries(lengths) as [keyof typeof lengths, number][]) {
    layout[kind] = length;
    length += count;
  }
  return { ...(layout as Layout), length };
}
