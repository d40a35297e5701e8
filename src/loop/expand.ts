import type {
  ActuatorDefinition,
  ControllerDefinition,
  Expression,
  SensorDefinition,
  SignalDefinition,
  Spec,
} from '../spec/spec.js';
import { TargetArithmetic } from './arithmetic.js';
import type { BlockUse, Workshop } from './blocks/block.js';
import { blocks } from './blocks/index.js';
import { Graph, type Node } from './graph.js';
import { type Loop, LoopError, type Opening, type SignalRange } from './loop.js';
import { lower, type Surroundings } from './lower.js';
import { orderTasks } from './order_tasks.js';

/** The numbers that the build holds, by the spec's name for them; one for a scalar. */
export type CoefficientValues = ReadonlyMap<string, readonly number[]>;

const blockByKey = new Map(blocks.map((block) => [block.description.key, block]));

/**
 * Expands a spec with its coefficients into the loop's equations. With `openAt` every consumer of that sensor, controller or
 * actuator signal sees an injected value instead.
 * @throws {LoopError} where the build's numbers do not fit the spec, or `openAt` cannot be opened.
 */
export function expandLoop(spec: Spec, coefficients: CoefficientValues, openAt?: string): Loop {
  return new Expansion(spec, coefficients, openAt).loop();
}

class Expansion {
  private readonly graph = new Graph();
  private readonly plain = new TargetArithmetic(this.graph, 'float64');
  private readonly parts: Pick<Loop, 'states' | 'memories' | 'readings' | 'held'> = {
    states: [],
    memories: [],
    readings: [],
    held: [],
  };
  /** Work to be done once every signal has a node: rates and next values may refer to any signal. */
  private readonly deferred: (() => void)[] = [];
  private readonly plantSignals = new Map<string, Node>();
  private readonly controllerSignals = new Map<string, Node>();
  private readonly measuredBySensor = new Map<string, Node>();
  private readonly readingOf = new Map<string, Node>();
  private readonly heldOf = new Map<string, Node>();
  private readonly controllers: ControllerDefinition[];
  private readonly noises: number[] = [];
  private opening: Opening | undefined;

  constructor(
    private readonly spec: Spec,
    private readonly coefficients: CoefficientValues,
    private readonly openAt: string | undefined,
  ) {
    this.controllers = orderTasks(spec);
  }

  loop(): Loop {
    const { spec } = this;
    for (const actuator of spec.actuators) this.addActuator(actuator);
    for (const signal of spec.plant) this.plantSignal(signal.name);
    this.controllers.forEach((controller, task) => {
      for (const signal of controller.signals) this.controllerSignal(signal, task);
    });
    for (let work = this.deferred.shift(); work; work = this.deferred.shift()) work();
    const signals = this.tracedSignals();
    return {
      graph: this.graph,
      parameters: spec.parameters.map(({ name }) => name),
      inputs: spec.inputs.map(({ name }) => name),
      inputRest: spec.inputs.map(({ rest }) => rest),
      ...this.parts,
      tasks: this.controllers.map((controller) => ({
        name: controller.name,
        place: controller.place,
        period: this.timing(controller.every),
        phase: controller.phase ? this.timing(controller.phase) : this.graph.number(0),
        delay: controller.delay ? this.timing(controller.delay) : this.graph.number(0),
      })),
      noises: this.noises,
      signals,
      opening: this.openAt === undefined ? undefined : this.foundOpening(),
    };
  }

  private foundOpening(): Opening {
    if (this.opening) return this.opening;
    throw new LoopError(
      `the loop cannot be opened at '${this.openAt}': no controller takes it`,
      this.spec.requirements.find(({ signals }) => signals.at === this.openAt)?.place ??
        this.spec.controllers[0].place,
    );
  }

  private timing(expression: Expression): Node {
    return lower(expression, this.plantSurroundings());
  }

  private plantSurroundings(): Surroundings {
    return {
      arithmetic: this.plain,
      name: (use) => this.plantName(use),
      before: () => {
        throw new Error('before() in a plant expression passed the spec reader');
      },
    };
  }

  private plantName({ role, name, index, place }: Extract<Expression, { kind: 'name' }>): Node {
    switch (role) {
      case 'signal':
        return this.plantSignal(name);
      case 'actuator':
        return this.heldOf.get(name)!;
      case 'coefficient':
        return this.graph.number(this.coefficient(name, index, place));
      default:
        return this.common(role, name);
    }
  }

  private common(role: string, name: string): Node {
    if (role === 'input')
      return this.graph.leaf(
        'input',
        this.spec.inputs.findIndex((input) => input.name === name),
      );
    if (role === 'parameter') {
      return this.graph.leaf(
        'parameter',
        this.spec.parameters.findIndex((parameter) => parameter.name === name),
      );
    }
    throw new Error(`a ${role} '${name}' stands where the spec reader should not have let it`);
  }

  private coefficient(name: string, index: number | undefined, place: BlockUse['place']): number {
    const values = this.coefficients.get(name);
    if (!values) throw new LoopError(`coefficient '${name}' was not read from the build`, place);
    if (index === undefined && values.length !== 1) {
      throw new LoopError(
        `coefficient '${name}' is an array of ${values.length}, expected one number: write '${name}[0]' or another index`,
        place,
      );
    }
    const value = values[index ?? 0];
    if (value === undefined) {
      throw new LoopError(
        `'${name}[${index}]' is past the end: the build holds ${values.length} numbers`,
        place,
      );
    }
    return value;
  }

  private plantSignal(name: string): Node {
    const found = this.plantSignals.get(name);
    if (found) return found;
    const definition = this.spec.plant.find((signal) => signal.name === name)!;
    const workshop = this.plantWorkshop((leaf) => this.plantSignals.set(name, leaf), definition);
    const node = this.expandBlock(definition, this.plantSurroundings(), workshop);
    this.plantSignals.set(name, node);
    return node;
  }

  /** `early` is told a block's state at once, so that its own rate may refer to the signal. */
  private plantWorkshop(early: (leaf: Node) => void, { start }: { start?: number }): Workshop {
    return {
      arithmetic: this.plain,
      addState: (name, derivative) => {
        const state = { name, derivative: this.graph.number(0), start: start ?? 0 };
        const leaf = this.graph.leaf('state', this.parts.states.push(state) - 1);
        early(leaf);
        this.deferred.push(() => {
          state.derivative = derivative();
        });
        return leaf;
      },
      addMemory: () => {
        throw new Error('a block of the plant asked for a sampled memory');
      },
      period: () => {
        throw new Error('a block of the plant asked for a sampling period');
      },
    };
  }

  private addActuator(actuator: ActuatorDefinition): void {
    const { name } = actuator;
    const task = this.controllers.findIndex(({ signals }) =>
      signals.some((signal) => signal.name === actuator.of),
    );
    const index = this.addHeld(name, task, () => this.actuatorValue(actuator, task));
    const leaf = this.graph.leaf('held', index);
    this.heldOf.set(name, leaf);
    this.open(name, task, 'deliver', leaf, (injected) => this.heldOf.set(name, injected));
  }

  private actuatorValue(actuator: ActuatorDefinition, task: number): Node {
    const around = this.plantSurroundings();
    const definition = this.controllers[task].signals.find((signal) => signal.name === actuator.of)!;
    let value = this.scaledBy(this.seenByOthers(actuator.of), definition.unit.scale);
    if (actuator.resolution) value = this.graph.apply('quantise', value, lower(actuator.resolution, around));
    return this.limited(value, actuator.range, around);
  }

  private limited(value: Node, range: SignalDefinition['range'], around: Surroundings): Node {
    return range
      ? this.graph.apply('limit', value, lower(range.low, around), lower(range.high, around))
      : value;
  }

  private addHeld(name: string, task: number, value: () => Node): number {
    const held = { name, task, value: this.graph.number(0) };
    this.deferred.push(() => {
      held.value = value();
    });
    return this.parts.held.push(held) - 1;
  }

  private arithmeticOf(task: number): TargetArithmetic {
    return new TargetArithmetic(this.graph, this.controllers[task].arithmetic);
  }

  private controllerSurroundings(task: number): Surroundings {
    const arithmetic = this.arithmeticOf(task);
    return {
      arithmetic,
      name: (use) => this.controllerName(use, task, arithmetic),
      before: (of) => {
        const next = (): Node => lower(of, this.controllerSurroundings(task));
        return this.addMemory('before()', task, next, 0);
      },
    };
  }

  private controllerName(
    { role, name, index, place }: Extract<Expression, { kind: 'name' }>,
    task: number,
    arithmetic: TargetArithmetic,
  ): Node {
    switch (role) {
      case 'sensor':
        return this.reading(name, task);
      case 'coefficient':
        return arithmetic.number(this.coefficient(name, index, place));
      case 'signal': {
        const owner = this.controllers.findIndex(({ signals }) =>
          signals.some((signal) => signal.name === name),
        );
        if (owner === task) return this.seenByOthers(name);
        return arithmetic.take(this.fromOtherController(name, owner));
      }
      case 'input': {
        const { scale } = this.spec.inputs.find((input) => input.name === name)!.unit;
        return arithmetic.take(this.inUnit(this.common(role, name), scale));
      }
      default:
        return arithmetic.take(this.common(role, name));
    }
  }

  /** From SI into a declared unit. */
  private inUnit(node: Node, scale: number): Node {
    return scale === 1 ? node : this.plain.divide(node, this.graph.number(scale));
  }

  /** A controller's signal as its consumers see it: the injected value where the loop is opened there. */
  private seenByOthers(name: string): Node {
    const task = this.controllers.findIndex(({ signals }) => signals.some((signal) => signal.name === name));
    const definition = this.controllers[task].signals.find((signal) => signal.name === name)!;
    const node = this.controllerSignal(definition, task);
    return this.openAt === name ? this.graph.leaf('injected', 0) : node;
  }

  private fromOtherController(name: string, owner: number): Node {
    const key = `signal ${name}`;
    let leaf = this.heldOf.get(key);
    if (!leaf) {
      leaf = this.graph.leaf(
        'held',
        this.addHeld(name, owner, () => this.seenByOthers(name)),
      );
      this.heldOf.set(key, leaf);
    }
    return leaf;
  }

  private controllerSignal(definition: SignalDefinition, task: number): Node {
    const { name } = definition;
    const found = this.controllerSignals.get(name);
    if (found) return found;
    const workshop: Workshop = {
      arithmetic: this.arithmeticOf(task),
      addState: () => {
        throw new Error('a block of a controller asked for a continuous state');
      },
      addMemory: (memory, next) => this.addMemory(memory, task, next, definition.start ?? 0),
      period: () => this.arithmeticOf(task).take(this.timing(this.controllers[task].every)),
    };
    const node = this.expandBlock(definition, this.controllerSurroundings(task), workshop);
    this.controllerSignals.set(name, node);
    this.open(name, task, 'compute', node, () => undefined);
    return node;
  }

  private addMemory(name: string, task: number, next: () => Node, start: number): Node {
    const memory = { name, task, next: this.graph.number(0), start };
    const leaf = this.graph.leaf('memory', this.parts.memories.push(memory) - 1);
    this.deferred.push(() => {
      memory.next = next();
    });
    return leaf;
  }

  private expandBlock(definition: SignalDefinition, around: Surroundings, workshop: Workshop): Node {
    const block = blockByKey.get(definition.block)!;
    const expression = (of: Expression | undefined): Node | undefined => of && lower(of, around);
    const use: BlockUse = {
      name: definition.name,
      place: definition.place,
      input: () => expression(definition.of)!,
      gain: () => expression(definition.gain) ?? around.arithmetic.number(1),
      setting: (name) => {
        const setting = definition.settings[name];
        return setting?.kind === 'expression' ? expression(setting.expression) : undefined;
      },
      word: (name) => {
        const setting = definition.settings[name];
        return setting?.kind === 'word' ? setting.word : undefined;
      },
      coefficients: (name) => {
        const setting = definition.settings[name];
        if (setting?.kind !== 'coefficients') return [];
        return (this.coefficients.get(setting.name) ?? []).map((value) => around.arithmetic.number(value));
      },
      range: definition.range && {
        low: lower(definition.range.low, around),
        high: lower(definition.range.high, around),
      },
    };
    const node = block.expand(use, workshop);
    if (definition.slew)
      throw new LoopError(`'slew' of '${definition.name}' is not available yet`, definition.place);
    return use.range && !block.keepsRange
      ? this.graph.apply('limit', node, use.range.low, use.range.high)
      : node;
  }

  /** The sensor's continuous value: gain, offset and filter, before it is sampled. */
  private measured(sensor: SensorDefinition): Node {
    const found = this.measuredBySensor.get(sensor.name);
    if (found) return found;
    const around = this.plantSurroundings();
    const { plain } = this;
    let value = lower(sensor.of, around);
    if (sensor.gain) value = plain.multiply(lower(sensor.gain, around), value);
    if (sensor.offset) value = plain.add(value, lower(sensor.offset, around));
    if (sensor.filter) {
      const source = value;
      const constant = lower(sensor.filter, around);
      const state: Node = this.plantWorkshop(() => undefined, {}).addState(`${sensor.name} filter`, () =>
        plain.divide(plain.subtract(source, state), constant),
      );
      value = state;
    }
    this.measuredBySensor.set(sensor.name, value);
    return value;
  }

  private reading(name: string, task: number): Node {
    const key = `${name} ${task}`;
    const found = this.readingOf.get(key);
    if (found) return found;
    const sensor = this.spec.sensors.find((candidate) => candidate.name === name)!;
    const sampled = this.arithmeticOf(task).take(
      this.inUnit(this.sampledValue(sensor, task), sensor.unit.scale),
    );
    const leaf = this.graph.leaf('reading', this.parts.readings.push({ sensor: name, task, sampled }) - 1);
    let seen = leaf;
    this.open(name, task, 'compute', leaf, (injected) => {
      seen = injected;
    });
    this.readingOf.set(key, seen);
    return seen;
  }

  /** Noise, range and quantum, in SI. */
  private sampledValue(sensor: SensorDefinition, task: number): Node {
    const around = this.plantSurroundings();
    let value = this.measured(sensor);
    if (sensor.noise) {
      const draw = this.graph.leaf('noise', this.noises.push(task) - 1);
      value = this.plain.add(value, this.plain.multiply(lower(sensor.noise, around), draw));
    }
    value = this.limited(value, sensor.range, around);
    return sensor.quantum ? this.graph.apply('quantise', value, lower(sensor.quantum, around)) : value;
  }

  private open(
    name: string,
    task: number,
    when: Opening['when'],
    returned: Node,
    cut: (injected: Node) => void,
  ): void {
    if (this.openAt !== name) return;
    if (this.opening && this.opening.task !== task) {
      throw new LoopError(
        `the loop cannot be opened at '${name}': controllers '${this.controllers[task].name}' and '${this.controllers[this.opening.task].name}' both sample it; open it at a signal of one controller`,
        this.controllers[task].place,
      );
    }
    this.opening = { at: name, task, when, returned };
    cut(this.graph.leaf('injected', 0));
  }

  /** Every name that a requirement may follow, in SI. */
  private tracedSignals(): Loop['signals'] {
    const signals: Loop['signals'] = new Map();
    const { graph, spec } = this;
    const plant = this.plantSurroundings();
    spec.inputs.forEach(({ name }, index) => {
      signals.set(name, { kind: 'continuous', value: graph.leaf('input', index), range: undefined });
    });
    for (const { name, range } of spec.plant) {
      const value = this.plantSignals.get(name)!;
      signals.set(name, { kind: 'continuous', value, range: this.rangeInSI(range, plant, 1) });
    }
    for (const { name, range, resolution } of spec.actuators) {
      const index = this.parts.held.findIndex((held) => held.name === name);
      const step = resolution && lower(resolution, plant);
      signals.set(name, {
        kind: 'continuous',
        value: graph.leaf('held', index),
        range: this.rangeInSI(range, plant, 1, step),
      });
    }
    for (const [index, { sensor, task }] of this.parts.readings.entries()) {
      const { unit, range, quantum } = spec.sensors.find(({ name }) => name === sensor)!;
      const value = this.scaledBy(graph.leaf('reading', index), unit.scale);
      const step = quantum && lower(quantum, plant);
      signals.set(sensor, { kind: 'sampled', task, value, range: this.rangeInSI(range, plant, 1, step) });
    }
    this.controllers.forEach((controller, task) => {
      for (const { name, unit, range } of controller.signals) {
        const value = this.scaledBy(this.controllerSignals.get(name)!, unit.scale);
        const inSI = this.rangeInSI(range, this.controllerSurroundings(task), unit.scale);
        signals.set(name, { kind: 'sampled', task, value, range: inSI });
      }
    });
    return signals;
  }

  private rangeInSI(
    range: SignalDefinition['range'],
    around: Surroundings,
    scale: number,
    step: Node = this.graph.number(0),
  ): SignalRange | undefined {
    if (!range) return undefined;
    const end = (expression: Expression): Node => this.scaledBy(lower(expression, around), scale);
    return { low: end(range.low), high: end(range.high), resolution: step };
  }

  private scaledBy(value: Node, scale: number): Node {
    return scale === 1 ? value : this.graph.apply('multiply', value, this.graph.number(scale));
  }
}
