import type { Place } from '../spec/spec.js';
import type { LeafKind, Node } from './graph.js';
import { LoopError } from './loop.js';
import type { Parts } from './parts.js';

/** More copies than this only come from a dead time whose input depends on its own output without a sampler between. */
const mostCopies = 400;

/**
 * Signals of the plant as they were some time ago, exactly. What moves a signal is copied and driven by the same inputs and held
 * values, each as much later: x(t − T) obeys the equations of x with everything that drives it delayed by T. So a dead time is
 * no approximation, in a trace or in frequency, and needs no history.
 */
export class DelayedCopies {
  private readonly copies = new Map<string, Node>();

  constructor(private readonly parts: Parts) {}

  /**
   * The value of an expression `delay` s ago.
   * @throws {LoopError} at `place` for a dead time inside a continuous loop, when the equations are finished.
   */
  of(node: Node, delay: Node, place: Place): Node {
    if (delay.kind === 'number' && delay.value === 0) return node;
    switch (node.kind) {
      case 'number':
        return node;
      case 'operation':
        return this.parts.graph.apply(
          node.name,
          ...node.of.map((argument) => this.of(argument, delay, place)),
        );
      case 'leaf':
        return node.leaf === 'parameter' ? node : this.ofLeaf(node.leaf, node.index, delay, place);
    }
  }

  private ofLeaf(kind: LeafKind, index: number, delay: Node, place: Place): Node {
    const key = `${kind} ${index} ${delay.id}`;
    const found = this.copies.get(key);
    if (found) return found;
    const copy = this.copyOf(kind, index, delay, place);
    this.copies.set(key, copy);
    if (this.copies.size > mostCopies) {
      throw new LoopError(
        'this dead time lies in a continuous loop: what goes in depends on what comes out with no sampler between; sample the signal, or use a lag instead',
        place,
      );
    }
    return copy;
  }

  private copyOf(kind: LeafKind, index: number, delay: Node, place: Place): Node {
    const { parts } = this;
    const later = (node: Node): Node => this.of(node, delay, place);
    switch (kind) {
      case 'state':
        return parts.addDelayedState(index, delay, later);
      case 'mode': {
        const original = parts.modes[index];
        return parts.addMode(`${original.name} delayed`, original.start, original.taken, () =>
          later(original.next),
        );
      }
      case 'held':
        return parts.addDelayedHeld(index, delay);
      case 'input':
        return parts.addDelayedInput(index, delay);
      default:
        throw new Error(`a ${kind} stands in an expression of the plant`);
    }
  }
}
