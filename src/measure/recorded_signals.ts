import type { Run } from '../kernel/trace.js';
import type { Node } from '../loop/graph.js';
import type { Loop, TracedSignal } from '../loop/loop.js';
import { rateOf } from '../loop/rate.js';
import { type Curve, curveOf } from './curve.js';
import { largerOf, smallerOf } from './curve_arithmetic.js';

/**
 * How the curve of a signal is put together: from one record, or where the signal has kinks (a range, the larger of two)
 * from the records of its smooth parts, so that the kinks stand where they are and not somewhere in a piece.
 */
type Assembly =
  | { kind: 'record'; value: number; rate: number | undefined }
  | { kind: 'larger' | 'smaller'; of: Assembly[] };

/** The signals that a run records so that the curves of the traced ones can be formed. */
export class RecordedSignals {
  /** The loop with every recorded signal under a name of its own. */
  readonly loop: Loop;
  /** What to record, in this order. */
  readonly names: string[] = [];
  private readonly assemblies = new Map<string, Assembly>();

  /** @param traced names of the signals to follow. */
  constructor(loop: Loop, traced: readonly string[]) {
    this.loop = { ...loop, signals: new Map(loop.signals) };
    for (const name of traced) this.assemblies.set(name, this.assemblyOf(loop.signals.get(name)!));
  }

  /** The curve of a traced signal in a run that recorded `names`. */
  curve(run: Run, name: string): Curve {
    return assembled(run, this.assemblies.get(name)!);
  }

  private assemblyOf(signal: TracedSignal): Assembly {
    if (signal.kind === 'sampled') return { kind: 'record', value: this.record(signal), rate: undefined };
    return this.continuous(signal.value);
  }

  private continuous(value: Node): Assembly {
    const inner = (...nodes: Node[]): Assembly[] => nodes.map((node) => this.continuous(node));
    if (value.kind === 'operation') {
      const [a, b, c] = value.of;
      if (value.name === 'limit') {
        const [low, high] = inner(b, c);
        const above: Assembly = { kind: 'larger', of: [this.continuous(a), low] };
        return { kind: 'smaller', of: [above, high] };
      }
      if (value.name === 'max') return { kind: 'larger', of: inner(a, b) };
      if (value.name === 'min') return { kind: 'smaller', of: inner(a, b) };
      if (value.name === 'abs') return { kind: 'larger', of: inner(a, this.loop.graph.apply('negate', a)) };
    }
    const rate = rateOf(this.loop.graph, this.loop.states, value);
    return {
      kind: 'record',
      value: this.record({ kind: 'continuous', value, range: undefined }),
      rate:
        rate.kind === 'number'
          ? undefined
          : this.record({ kind: 'continuous', value: rate, range: undefined }),
    };
  }

  private record(signal: TracedSignal): number {
    // No signal of a spec has a name with a blank.
    const name = `record ${this.names.length}`;
    this.loop.signals.set(name, signal);
    return this.names.push(name) - 1;
  }
}

function assembled(run: Run, assembly: Assembly): Curve {
  if (assembly.kind === 'record') return curveOf(run, assembly.value, assembly.rate);
  const curves = assembly.of.map((part) => assembled(run, part));
  return curves.reduce(assembly.kind === 'larger' ? largerOf : smallerOf);
}
