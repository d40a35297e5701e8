import type { Place } from '../spec/spec.js';
import { TargetArithmetic } from './arithmetic.js';
import { Graph, type Node } from './graph.js';
import {
  type Channel,
  type ContinuousState,
  type Correction,
  type DelayedSource,
  type Held,
  LoopError,
  type Memory,
  type Mode,
  type ModeTaken,
  type ProgrammedChange,
  type Reading,
} from './loop.js';
import { rateOf } from './rate.js';

/** Numbers of a build with the format in which it holds them. */
export interface StoredNumbers {
  values: readonly number[];
  /** Such as Q2.14 or float32. */
  format: string;
  /** Of fixed-point numbers and integers; undefined for others. */
  fractionalBits: number | undefined;
}

/** The numbers that the build holds, by the spec's name for them; one for a scalar. */
export type CoefficientValues = ReadonlyMap<string, readonly number[] | StoredNumbers>;

/**
 * The growing equations of a loop. Rates, next values and held values are deferred until every signal has a node, because
 * they may refer to any signal.
 */
export class Parts {
  readonly graph = new Graph();
  /** Expressions of the plant: SI, in the arithmetic of the simulation. */
  readonly plain = new TargetArithmetic(this.graph, 'float64');
  readonly inputs: { name: string; rest: number }[];
  readonly states: ContinuousState[] = [];
  readonly modes: Mode[] = [];
  readonly corrections: Correction[] = [];
  readonly delayedSources: DelayedSource[] = [];
  /** What happens over time in a scenario. */
  readonly program: ProgrammedChange[] = [];
  readonly memories: Memory[] = [];
  readonly readings: Reading[] = [];
  readonly held: Held[] = [];
  readonly channels: Channel[] = [];
  readonly noises: number[] = [];
  private readonly deferred: (() => void)[] = [];
  /** Work that looks at the finished rates of the states. */
  private readonly late: (() => void)[] = [];

  constructor(
    inputs: readonly { name: string; rest: number }[],
    private readonly coefficients: CoefficientValues,
  ) {
    this.inputs = inputs.map(({ name, rest }) => ({ name, rest }));
  }

  addState(name: string, start: number, derivative: () => Node): Extract<Node, { kind: 'leaf' }> {
    const state = { name, start, derivative: this.graph.number(0) };
    this.deferred.push(() => {
      state.derivative = derivative();
    });
    return this.graph.leaf('state', this.states.push(state) - 1);
  }

  /** A value of the plant that is no state. */
  addMode(name: string, start: number, taken: ModeTaken, next: () => Node): Node {
    const mode = { name, start, taken, next: this.graph.number(0) };
    this.late.push(() => {
      mode.next = next();
    });
    return this.graph.leaf('mode', this.modes.push(mode) - 1);
  }

  /** Rate of an expression along the motion of the plant; only when the rates of all states are finished. */
  rateOf(value: Node): Node {
    return rateOf(this.graph, this.states, value);
  }

  /** Brings a state to a value after every step of the movement. */
  addCorrection(state: Node, value: () => Node): void {
    if (state.kind !== 'leaf' || state.leaf !== 'state') throw new Error('only a state can be corrected');
    const correction = { state: state.index, value: state as Node };
    this.corrections.push(correction);
    this.deferred.push(() => {
      correction.value = value();
    });
  }

  /** A quantity from outside beside those of the spec. */
  addInput(name: string, rest: number): Extract<Node, { kind: 'leaf' }> {
    return this.graph.leaf('input', this.inputs.push({ name, rest }) - 1);
  }

  /** An input as it was some time ago. */
  addDelayedInput(source: number, delay: Node): Node {
    const { name, rest } = this.inputs[source];
    const copy = this.addInput(`${name} delayed`, rest);
    this.delayedSources.push({ kind: 'input', index: copy.index, source, delay });
    return copy;
  }

  /** A state as it was some time ago; it is set, where a scenario sets it, as much later. */
  addDelayedState(source: number, delay: Node, later: (node: Node) => Node): Node {
    const { name, start } = this.states[source];
    const copy = this.addState(`${name} delayed`, start, () => later(this.states[source].derivative));
    this.delayedSources.push({ kind: 'state', index: copy.index, source, delay });
    this.late.push(() => {
      for (const { state, value } of this.corrections.filter((one) => one.state === source)) {
        if (value !== this.graph.leaf('state', state)) this.addCorrection(copy, () => later(value));
      }
    });
    return copy;
  }

  /** A held value that takes effect some time later than another. */
  addDelayedHeld(source: number, delay: Node): Node {
    const { name, channel } = this.held[source];
    const { task, delay: first } = this.channels[channel];
    return this.addHeld(`${name} delayed`, task, this.plain.add(first, delay), () => this.held[source].value);
  }

  addMemory(name: string, task: number, start: number, next: () => Node): Node {
    const memory = { name, task, start, next: this.graph.number(0) };
    this.deferred.push(() => {
      memory.next = next();
    });
    return this.graph.leaf('memory', this.memories.push(memory) - 1);
  }

  /** @param delay from the task's sampling instant to when the value takes effect, in s. */
  addHeld(name: string, task: number, delay: Node, value: () => Node): Node {
    const held = { name, channel: this.channelOf(task, delay), value: this.graph.number(0) };
    this.deferred.push(() => {
      held.value = value();
    });
    return this.graph.leaf('held', this.held.push(held) - 1);
  }

  private channelOf(task: number, delay: Node): number {
    const found = this.channels.findIndex((channel) => channel.task === task && channel.delay === delay);
    return found < 0 ? this.channels.push({ task, delay }) - 1 : found;
  }

  addReading(sensor: string, task: number, sampled: Node): Node {
    return this.graph.leaf('reading', this.readings.push({ sensor, task, sampled }) - 1);
  }

  /** A draw from the standard normal distribution at each sampling instant of the task. */
  addNoise(task: number): Node {
    return this.graph.leaf('noise', this.noises.push(task) - 1);
  }

  /** Looks at the finished equations. */
  whenFinished(work: () => void): void {
    this.late.push(work);
  }

  /** Does the deferred work, and what it defers in turn. */
  finish(): void {
    const next = (): (() => void) | undefined => this.deferred.shift() ?? this.late.shift();
    for (let work = next(); work; work = next()) work();
  }

  /** All numbers of a coefficient. */
  numbersOf(name: string, place: Place): readonly number[] {
    const found = this.coefficients.get(name);
    if (found) return isStored(found) ? found.values : found;
    throw new LoopError(`coefficient '${name}' was not read from the build`, place);
  }

  /** A number of a coefficient as a controller computes with it. */
  coefficient(
    { name, index, place }: { name: string; index: number | undefined; place: Place },
    arithmetic: TargetArithmetic,
  ): Node {
    const value = this.numberOf(name, index, place);
    const found = this.coefficients.get(name);
    const { format, fractionalBits } = isStored(found) ? found : {};
    const shown = index === undefined ? name : `${name}[${index}]`;
    return arithmetic.coefficient(value, { name: shown, place, format, fractionalBits });
  }

  /** One number of a coefficient: the scalar, or the element of an array at `index`. */
  numberOf(name: string, index: number | undefined, place: Place): number {
    const values = this.numbersOf(name, place);
    if (index === undefined && values.length !== 1) {
      throw new LoopError(
        `coefficient '${name}' is an array of ${values.length}, expected one number: write '${name}[0]' or another index`,
        place,
      );
    }
    const value = values[index ?? 0];
    if (value !== undefined) return value;
    throw new LoopError(
      `'${name}[${index}]' is past the end: the build holds ${values.length} numbers, counted from 0`,
      place,
    );
  }
}

function isStored(of: readonly number[] | StoredNumbers | undefined): of is StoredNumbers {
  return of !== undefined && 'format' in of;
}
