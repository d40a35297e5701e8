import { timeDimension } from './dimension.js';
import { controllerRoom, plantRoom, timingRoom } from './names.js';
import { readActuator } from './read_actuator.js';
import { readArithmetic } from './read_arithmetic.js';
import { readExpression, type Slot, type Surroundings } from './read_expression.js';
import { readPeriod } from './read_frequency.js';
import { declareEntry } from './read_named.js';
import { readUnit } from './read_quantity.js';
import { readSensor } from './read_sensor.js';
import { readSignal } from './read_signal.js';
import { missing, type Reading } from './reading.js';
import type {
  ActuatorDefinition,
  ControllerDefinition,
  Expression,
  SensorDefinition,
  SignalDefinition,
} from './spec.js';
import { childOf, entriesOf, type MapEntry, type MapTree, type Tree } from './tree.js';

const plant: Surroundings = { room: plantRoom, convertsFreely: true };
const timing: Surroundings = { room: timingRoom, convertsFreely: true };

/** Takes every signal, sensor and actuator into the namespace with its unit, before any expression is read. */
export function declareLoop(root: MapTree, reading: Reading): void {
  const declareAll = (
    tree: Tree | undefined,
    kind: Parameters<typeof declareEntry>[1],
    controller?: string,
  ) => {
    for (const entry of entriesOf(tree)) {
      declareEntry(entry, kind, readUnit(childOf(entry.value, 'unit'), reading), reading, { controller });
    }
  };
  declareAll(childOf(root, 'plant'), 'plant signal');
  declareAll(childOf(root, 'sensors'), 'sensor');
  for (const { key, value } of entriesOf(childOf(root, 'controllers'))) {
    declareAll(childOf(value, 'signals'), 'controller signal', key);
  }
  declareAll(childOf(root, 'actuators'), 'actuator');
}

/** `plant:` continuous signals, in SI. */
export function readPlant(tree: Tree | undefined, reading: Reading): SignalDefinition[] {
  return entriesOf(tree).flatMap((entry) => readSignal(entry, 'plant', plant, reading) ?? []);
}

/** `sensors:` from a continuous signal to a reading; settings in SI. */
export function readSensors(tree: Tree | undefined, reading: Reading): SensorDefinition[] {
  return entriesOf(tree).map((entry) => readSensor(entry, reading));
}

/** `controllers:` what the firmware computes, in the declared units of its signals. */
export function readControllers(tree: Tree | undefined, reading: Reading): ControllerDefinition[] {
  return entriesOf(tree).map((entry) => readController(entry, reading));
}

function readController(entry: MapEntry, reading: Reading): ControllerDefinition {
  const part = (key: string) => childOf(entry.value, key);
  const arithmetic = readArithmetic(part('arithmetic'), reading);
  const around: Surroundings = { room: controllerRoom, convertsFreely: arithmetic === 'float64' };
  const time = (key: string): Slot => ({ dimension: timeDimension, scale: 1, what: `\`${key}\`` });
  return {
    name: entry.key,
    place: entry.keyPlace,
    every:
      positive(readPeriod(part('every'), '`every`', timing, reading), reading) ?? missing(entry.keyPlace),
    phase: readExpression(part('phase'), time('phase'), timing, reading),
    delay: readExpression(part('delay'), time('delay'), timing, reading),
    jitter: readExpression(part('jitter'), time('jitter'), timing, reading),
    arithmetic,
    signals: entriesOf(part('signals')).flatMap(
      (one) => readSignal(one, 'controller', around, reading) ?? [],
    ),
  };
}

function positive(period: Expression | undefined, reading: Reading): Expression | undefined {
  const size = period?.kind === 'negate' ? -1 : period?.kind === 'number' ? period.value : 1;
  if (period !== undefined && size <= 0) {
    reading.problems.add(period.place, 'a sampling period must be above 0');
  }
  return period;
}

/** `actuators:` from a controller's signal to what the plant feels; settings in SI. */
export function readActuators(tree: Tree | undefined, reading: Reading): ActuatorDefinition[] {
  return entriesOf(tree).map((entry) => readActuator(entry, reading));
}
