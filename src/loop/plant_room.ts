import type { Expression, Place, Scenario, SensorDefinition, SignalDefinition, Spec } from '../spec/spec.js';
import type { Workshop } from './blocks/block.js';
import { DelayedCopies } from './delayed.js';
import { expandBlock } from './expand_block.js';
import type { Node } from './graph.js';
import { InputProgram } from './input_program.js';
import { lower, type Surroundings } from './lower.js';
import type { Parts } from './parts.js';
import { measuredValue } from './sensor.js';

/** The continuous side of a loop: plant signals, and sensors up to where they are sampled. All in SI. */
export class PlantRoom {
  /** What names mean in expressions of the plant, of sensors, actuators, timings and scenarios. */
  readonly surroundings: Surroundings;
  private readonly signals = new Map<string, Node>();
  private readonly measuredBySensor = new Map<string, Node>();
  private readonly actuators = new Map<string, Node>();
  private readonly delayedCopies: DelayedCopies;
  /** What the inputs do. */
  readonly inputs: InputProgram;

  constructor(
    private readonly spec: Spec,
    private readonly parts: Parts,
    scenario: Scenario | undefined,
  ) {
    this.delayedCopies = new DelayedCopies(parts);
    this.surroundings = {
      arithmetic: parts.plain,
      name: (use) => this.named(use),
      before: () => {
        throw new Error('before() in a plant expression passed the spec reader');
      },
    };
    this.inputs = new InputProgram(spec, scenario, parts, (expression) => this.lower(expression));
  }

  /** Tells what the plant sees of an actuator. */
  connect(actuator: string, seen: Node): void {
    this.actuators.set(actuator, seen);
  }

  lower(expression: Expression): Node {
    return lower(expression, this.surroundings);
  }

  /** An input or a parameter, SI. */
  outer(role: 'input' | 'parameter', name: string): Node {
    const named = (one: { name: string }): boolean => one.name === name;
    if (role === 'input') return this.inputs.value(this.spec.inputs.findIndex(named));
    return this.parts.graph.leaf('parameter', this.spec.parameters.findIndex(named));
  }

  signal(name: string): Node {
    const found = this.signals.get(name);
    if (found) return found;
    const definition = this.spec.plant.find((signal) => signal.name === name)!;
    const node = expandBlock(definition, this.surroundings, this.workshop(definition), this.parts);
    this.signals.set(name, node);
    return node;
  }

  /** An expression of the plant as it was some time ago (s). */
  delayed(node: Node, delay: Node, place: Place): Node {
    return this.delayedCopies.of(node, delay, place);
  }

  /** The sensor's continuous value, before it is sampled. */
  measured(sensor: SensorDefinition): Node {
    const found = this.measuredBySensor.get(sensor.name);
    if (found) return found;
    const value = measuredValue(sensor, this, this.parts);
    this.measuredBySensor.set(sensor.name, value);
    return value;
  }

  private named({ role, name, index, place }: Extract<Expression, { kind: 'name' }>): Node {
    switch (role) {
      case 'signal':
        return this.signal(name);
      case 'actuator':
        return this.actuators.get(name)!;
      case 'coefficient':
        return this.parts.graph.number(this.parts.numberOf(name, index, place));
      case 'input':
      case 'parameter':
        return this.outer(role, name);
      case 'sensor':
        throw new Error(`the plant sees sensor '${name}', which the spec reader should not have let pass`);
    }
  }

  private workshop({ start, place }: SignalDefinition): Workshop {
    const { parts } = this;
    return {
      room: 'plant',
      arithmetic: parts.plain,
      addState: (name, derivative, own) => parts.addState(name, own ?? start ?? 0, derivative),
      addMode: (name, taken, next, own) => parts.addMode(name, own ?? start ?? 0, taken, next),
      rateOf: (value) => parts.rateOf(value),
      addCorrection: (state, value) => parts.addCorrection(state, value),
      delayed: (node, delay) => this.delayedCopies.of(node, delay, place),
      addMemory: () => notHere('a sampled memory'),
      period: () => notHere('a sampling period'),
      exactPeriod: () => notHere('a sampling period'),
      publish: () => notHere('to publish values'),
      published: () => notHere('published values'),
    };
  }
}

function notHere(what: string): never {
  throw new Error(`a block of the plant asked for ${what}`);
}
