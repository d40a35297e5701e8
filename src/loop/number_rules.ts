import type { Place } from '../spec/spec.js';
import type { Node, OperationName } from './graph.js';
import { LoopError } from './loop.js';

/** A part of a sum: a value, or a product of two; added, or taken off. */
export interface Term {
  value: Node;
  factor?: Node | undefined;
  minus?: boolean;
}

/** How one number format computes. */
export interface NumberRules {
  /** A number from outside brought into the format, to the nearest one. */
  take: (node: Node) => Node;
  /** A number that the firmware's source holds. */
  number: (value: number) => Node;
  /** What a signal keeps of a value: in fixed point a truth or a sign becomes a number of the format. */
  keep: (node: Node) => Node;
  /** Any operation but those below. */
  apply: (name: OperationName, of: readonly Node[]) => Node;
  /** The terms from left to right, as one expression of the firmware's source. */
  sum: (terms: readonly Term[]) => Node;
  divide: (a: Node, b: Node) => Node;
}

/** An operation that a number format does not have, or a number that does not fit it; in words for people. */
export class FormatMismatch extends Error {
  /** @param place where it is known better than by whoever asked for the operation. */
  constructor(
    message: string,
    readonly place?: Place,
  ) {
    super(message);
  }
}

/** Does what may meet a mismatch. @throws {LoopError} with the place, where it does. */
export function placed<T>(place: Place, build: () => T): T {
  try {
    return build();
  } catch (error) {
    if (error instanceof FormatMismatch) throw new LoopError(error.message, error.place ?? place);
    throw error;
  }
}
