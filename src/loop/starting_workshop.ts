import type { SignalDefinition } from '../spec/spec.js';
import type { Workshop } from './blocks/block.js';
import { LoopError } from './loop.js';
import type { Parts } from './parts.js';

/** What to write instead of a `start` on blocks that have their own key for it. */
const ownKeys: Record<string, string> = {
  observer: 'give it `starts_at`, one number for each of its states',
  estimate: 'give its observer `starts_at`, one number for each of its states',
  hysteresis: 'give it `starts_on`',
};

/**
 * The workshop of a signal which sees to it that a `start:` is the start of something.
 * @throws {LoopError} when the equations are finished, for a start that nothing takes.
 */
export function startingWorkshop(
  { name, block, place, start }: SignalDefinition,
  workshop: Workshop,
  parts: Parts,
): Workshop {
  if (start === undefined) return workshop;
  let taken = false;
  const taking = (own: number | undefined): number | undefined => {
    taken ||= own === undefined;
    return own;
  };
  parts.whenFinished(() => {
    if (taken) return;
    const cure =
      ownKeys[block] ?? 'leave it out, or give it to a signal that keeps a value, such as an integral';
    throw new LoopError(
      `'start' of '${name}' does nothing: '${block}' has no single value to start; ${cure}`,
      place,
    );
  });
  return {
    ...workshop,
    addState: (own, derivative, at) => workshop.addState(own, derivative, taking(at)),
    addMode: (own, when, next, at) => workshop.addMode(own, when, next, taking(at)),
    addMemory: (own, next, at) => workshop.addMemory(own, next, taking(at)),
  };
}
