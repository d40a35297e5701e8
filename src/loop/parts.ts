import type { Place } from '../spec/spec.js';
import { TargetArithmetic } from './arithmetic.js';
import { Graph, type Node } from './graph.js';
import {
  type Channel,
  type ContinuousState,
  type Held,
  LoopError,
  type Memory,
  type Reading,
} from './loop.js';

/** The numbers that the build holds, by the spec's name for them; one for a scalar. */
export type CoefficientValues = ReadonlyMap<string, readonly number[]>;

/**
 * The growing equations of a loop. Rates, next values and held values are deferred until every signal has a node, because
 * they may refer to any signal.
 */
export class Parts {
  readonly graph = new Graph();
  /** Expressions of the plant: SI, in the arithmetic of the simulation. */
  readonly plain = new TargetArithmetic(this.graph, 'float64');
  readonly states: ContinuousState[] = [];
  readonly memories: Memory[] = [];
  readonly readings: Reading[] = [];
  readonly held: Held[] = [];
  readonly channels: Channel[] = [];
  readonly noises: number[] = [];
  private readonly deferred: (() => void)[] = [];

  constructor(private readonly coefficients: CoefficientValues) {}

  addState(name: string, start: number, derivative: () => Node): Node {
    const state = { name, start, derivative: this.graph.number(0) };
    this.deferred.push(() => {
      state.derivative = derivative();
    });
    return this.graph.leaf('state', this.states.push(state) - 1);
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

  /** Does the deferred work, and what it defers in turn. */
  finish(): void {
    for (let work = this.deferred.shift(); work; work = this.deferred.shift()) work();
  }

  /** All numbers of a coefficient. */
  numbersOf(name: string, place: Place): readonly number[] {
    const values = this.coefficients.get(name);
    if (values) return values;
    throw new LoopError(`coefficient '${name}' was not read from the build`, place);
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
