import type { ControllerDefinition } from '../spec/spec.js';
import type { Graph, Node } from './graph.js';
import { LoopError, type Opening } from './loop.js';

/** The place where a loop is opened: every consumer of that signal sees an injected value instead. */
export class Cut {
  private found: Opening | undefined;

  /** @param at name of a sensor, controller or actuator signal, or undefined for the closed loop. */
  constructor(
    private readonly graph: Graph,
    private readonly controllers: readonly ControllerDefinition[],
    readonly at: string | undefined,
  ) {}

  /**
   * What the consumers of a signal see: the signal, or the injected value where the loop is opened at it.
   * @throws {LoopError} when a second task has the signal too.
   */
  through(name: string, task: number, signal: Node): Node {
    if (this.at !== name) return signal;
    if (this.found && this.found.task !== task) {
      const [one, other] = [this.found.task, task].map((index) => this.controllers[index]);
      throw new LoopError(
        `the loop cannot be opened at '${name}': controllers '${one.name}' and '${other.name}' both sample it; open it at a signal of one controller`,
        other.place,
      );
    }
    this.found = { at: name, task, returned: signal };
    return this.graph.leaf('injected', 0);
  }

  /** @throws {LoopError} when nothing consumes the signal. */
  opening(place: LoopError['place']): Opening | undefined {
    if (this.at === undefined || this.found) return this.found;
    throw new LoopError(`the loop cannot be opened at '${this.at}': no controller takes it`, place);
  }
}
