import type {
  ActuatorDefinition,
  ControllerDefinition,
  Expression,
  SensorDefinition,
  SignalDefinition,
  Spec,
} from '../spec/spec.js';
import { actuatorValue, feltValue, updateDelay } from './actuator.js';
import { TargetArithmetic } from './arithmetic.js';
import type { Workshop } from './blocks/block.js';
import type { Cut } from './cut.js';
import { expandBlock } from './expand_block.js';
import type { Node } from './graph.js';
import { lower, type Surroundings } from './lower.js';
import type { Parts } from './parts.js';
import type { PlantRoom } from './plant_room.js';
import { sampledValue } from './sensor.js';

/**
 * The sampled side of a loop: readings, controller signals and actuators. Controllers compute in the declared units of their
 * signals; SI stays outside.
 */
export class ControllerRoom {
  private readonly signals = new Map<string, Node>();
  private readonly published = new Map<string, ReadonlyMap<string, Node>>();
  private readonly seenReadings = new Map<string, Node>();
  private readonly delivered = new Map<string, Node>();

  /** @param controllers in the order in which they compute; a task is an index into it. */
  constructor(
    private readonly spec: Spec,
    private readonly controllers: readonly ControllerDefinition[],
    private readonly parts: Parts,
    private readonly plant: PlantRoom,
    private readonly cut: Cut,
  ) {}

  /** A controller's signal as it computes it. */
  signal(name: string): Node {
    const found = this.signals.get(name);
    if (found) return found;
    const { definition, task } = this.owner(name);
    const workshop = this.workshop(definition, task);
    const node = expandBlock(definition, this.surroundings(task), workshop, this.parts);
    this.signals.set(name, node);
    return node;
  }

  /** Adds an actuator and tells the plant what it sees of it. */
  addActuator(actuator: ActuatorDefinition): void {
    const { task, definition } = this.owner(actuator.of);
    const { parts, plant } = this;
    const period = this.periodOf(task);
    const result = (): Node => {
      const { scale } = definition.unit;
      const seen = this.seen(actuator.of);
      return scale === 1 ? seen : parts.plain.multiply(seen, parts.graph.number(scale));
    };
    const delay = updateDelay(actuator, this.delayOf(task), period, parts);
    const held = parts.addHeld(actuator.name, task, delay, () =>
      this.cut.through(actuator.name, task, actuatorValue(actuator, result(), task, period, plant, parts)),
    );
    plant.connect(actuator.name, feltValue(actuator, held, period, plant, parts));
  }

  /** What names mean in expressions of a task. */
  surroundings(task: number): Surroundings {
    const arithmetic = this.arithmetic(task);
    return {
      arithmetic,
      name: (use) => this.named(use, task, arithmetic),
      before: (of) => this.parts.addMemory('before()', task, 0, () => lower(of, this.surroundings(task))),
    };
  }

  private owner(name: string): { definition: SignalDefinition; task: number } {
    const task = this.controllers.findIndex(({ signals }) => signals.some((signal) => signal.name === name));
    return { task, definition: this.controllers[task].signals.find((signal) => signal.name === name)! };
  }

  private periodOf(task: number): Node {
    return this.plant.lower(this.controllers[task].every);
  }

  private delayOf(task: number): Node {
    const { delay } = this.controllers[task];
    return delay ? this.plant.lower(delay) : this.parts.graph.number(0);
  }

  private arithmetic(task: number): TargetArithmetic {
    return new TargetArithmetic(this.parts.graph, this.controllers[task].arithmetic);
  }

  private workshop({ name, start }: SignalDefinition, task: number): Workshop {
    const exactPeriod = (): Node => this.plant.lower(this.controllers[task].every);
    return {
      room: 'controller',
      arithmetic: this.arithmetic(task),
      addState: () => notHere('a continuous state'),
      addMode: () => notHere('a mode'),
      rateOf: () => notHere('a rate'),
      addCorrection: () => notHere('a correction of a state'),
      delayed: () => notHere('a dead time'),
      addMemory: (own, next, begin) => this.parts.addMemory(own, task, begin ?? start ?? 0, next),
      period: () => this.arithmetic(task).take(exactPeriod()),
      exactPeriod,
      publish: (values) => this.published.set(name, values),
      published: (signal) => {
        this.signal(signal);
        return this.published.get(signal) ?? new Map();
      },
    };
  }

  private named(
    { role, name, index, place }: Extract<Expression, { kind: 'name' }>,
    task: number,
    arithmetic: TargetArithmetic,
  ): Node {
    switch (role) {
      case 'sensor':
        return this.reading(this.spec.sensors.find((sensor) => sensor.name === name)!, task);
      case 'coefficient':
        return this.parts.coefficient({ name, index, place }, arithmetic);
      case 'signal':
        return this.owner(name).task === task ? this.seen(name) : arithmetic.take(this.fromOther(name));
      case 'input': {
        const { scale } = this.spec.inputs.find((input) => input.name === name)!.unit;
        return arithmetic.take(this.inUnit(this.plant.outer(role, name), scale));
      }
      case 'parameter':
        return arithmetic.take(this.plant.outer(role, name));
      case 'actuator':
        throw new Error(
          `a controller sees actuator '${name}', which the spec reader should not have let pass`,
        );
    }
  }

  /** From SI into a declared unit. */
  private inUnit(node: Node, scale: number): Node {
    return scale === 1 ? node : this.parts.plain.divide(node, this.parts.graph.number(scale));
  }

  /** A controller's signal as its consumers see it. */
  private seen(name: string): Node {
    return this.cut.through(name, this.owner(name).task, this.signal(name));
  }

  private fromOther(name: string): Node {
    const found = this.delivered.get(name);
    if (found) return found;
    const { task } = this.owner(name);
    const held = this.parts.addHeld(name, task, this.delayOf(task), () => this.seen(name));
    this.delivered.set(name, held);
    return held;
  }

  /** A sensor's value at the instants of a task, as the task's expressions see it. */
  private reading(sensor: SensorDefinition, task: number): Node {
    const key = `${task} ${sensor.name}`;
    const found = this.seenReadings.get(key);
    if (found) return found;
    const value = sampledValue(sensor, task, this.periodOf(task), this.plant, this.parts);
    const sampled = this.arithmetic(task).take(this.inUnit(value, sensor.unit.scale));
    const reading = this.parts.addReading(sensor.name, task, sampled);
    const seen = this.cut.through(sensor.name, task, reading);
    this.seenReadings.set(key, seen);
    return seen;
  }
}

function notHere(what: string): never {
  throw new Error(`a block of a controller asked for ${what}`);
}
