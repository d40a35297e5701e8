import type { ControllerDefinition } from '../spec/spec.js';
import type { Graph, Node } from './graph.js';
import { LoopError, type Opening } from './loop.js';

/** The places where a loop is opened: every consumer of each of these signals sees an injected value of its own instead. */
export class Cut {
  private readonly found: (Opening | undefined)[];

  /** @param at names of sensors, controller signals or actuators, each once; none for the closed loop. */
  constructor(
    private readonly graph: Graph,
    private readonly controllers: readonly ControllerDefinition[],
    private readonly at: readonly string[],
  ) {
    this.found = at.map(() => undefined);
  }

  /**
   * What the consumers of a signal see: the signal, or the injected value where the loop is opened at it.
   * @throws {LoopError} when a second task has the signal too.
   */
  through(name: string, task: number, signal: Node): Node {
    const index = this.at.indexOf(name);
    if (index < 0) return signal;
    const before = this.found[index];
    if (before && before.task !== task) {
      const [one, other] = [before.task, task].map((each) => this.controllers[each]);
      throw new LoopError(
        `the loop cannot be opened at '${name}': controllers '${one.name}' and '${other.name}' both sample it; open it at a signal of one controller`,
        other.place,
      );
    }
    this.found[index] = { at: name, task, returned: signal };
    return this.graph.leaf('injected', index);
  }

  /** In the order of the names. @throws {LoopError} when nothing consumes a signal. */
  openings(place: LoopError['place']): Opening[] {
    return this.found.map((opening, index) => {
      if (opening) return opening;
      throw new LoopError(`the loop cannot be opened at '${this.at[index]}': no controller takes it`, place);
    });
  }
}
