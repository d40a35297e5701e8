import type { Loop } from './loop.js';
import { rewriter } from './rewritten.js';

/** The equations of a loop as if nothing were kept in a range. */
export function withoutRanges(loop: Loop): Loop {
  const free = rewriter(loop.graph, (name, of) => (name === 'limit' ? of[0] : undefined));
  return {
    ...loop,
    states: loop.states.map((state) => ({ ...state, derivative: free(state.derivative) })),
    modes: loop.modes.map((mode) => ({ ...mode, next: free(mode.next) })),
    memories: loop.memories.map((memory) => ({ ...memory, next: free(memory.next) })),
    readings: loop.readings.map((reading) => ({ ...reading, sampled: free(reading.sampled) })),
    held: loop.held.map((held) => ({ ...held, value: free(held.value) })),
  };
}
