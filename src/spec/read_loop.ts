import { quotientOf, timeDimension } from './dimension.js';
import { formatMismatch } from './format_dimension.js';
import { aKind, controllerRoom, plantRoom, settingRoom, timingRoom } from './names.js';
import { suggestion } from './nearest.js';
import { readArithmetic } from './read_arithmetic.js';
import {
  type Free,
  fit,
  readExpression,
  readFree,
  readRange,
  type Slot,
  type Surroundings,
} from './read_expression.js';
import { readPeriod, readTimeConstant } from './read_frequency.js';
import { declaredUnit, declareEntry } from './read_named.js';
import { readUnit } from './read_quantity.js';
import { readSignal } from './read_signal.js';
import { missing, type Reading } from './reading.js';
import { sameUnit } from './same_unit.js';
import type {
  ActuatorDefinition,
  ControllerDefinition,
  Expression,
  SensorDefinition,
  SignalDefinition,
} from './spec.js';
import { childOf, entriesOf, entryOf, type MapEntry, type MapTree, type Tree, textOf } from './tree.js';

const plant: Surroundings = { room: plantRoom, convertsFreely: true };
const setting: Surroundings = { room: settingRoom, convertsFreely: true };
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

function readSensor(entry: MapEntry, reading: Reading): SensorDefinition {
  const part = (key: string) => childOf(entry.value, key);
  const unit = declaredUnit(entry, reading);
  const own = (key: string): Slot => ({ dimension: unit?.dimension, scale: 1, what: `\`${key}\`` });
  const size = (key: string): Slot => ({ ...own(key), size: true });
  const measured = readFree(part('of'), plant, reading);
  const hasGain = part('gain') !== undefined;
  const gainDimension =
    unit && measured?.dimension ? quotientOf(unit.dimension, measured.dimension) : undefined;
  return {
    name: entry.key,
    place: entry.keyPlace,
    of: measuredBy(entry, measured, hasGain ? undefined : unit?.dimension),
    unit: unit!,
    gain: readExpression(
      part('gain'),
      { dimension: gainDimension, scale: 1, what: '`gain`' },
      setting,
      reading,
    ),
    offset: readExpression(part('offset'), size('offset'), setting, reading),
    filter: readTimeConstant(part('filter'), '`filter`', setting, reading),
    noise: readExpression(part('noise'), size('noise'), setting, reading),
    range: readRange(part('range'), own('range'), setting, reading),
    quantum: readExpression(part('quantum'), size('quantum'), setting, reading),
  };
}

function measuredBy(entry: MapEntry, measured: Free | undefined, dimension: Slot['dimension']): Expression {
  if (measured?.dimension === undefined) return missing(entry.keyPlace);
  if (dimension === undefined) return measured.expression;
  return fit(measured, {
    dimension,
    scale: 1,
    what: `what sensor \`${entry.key}\` measures (without a gain)`,
  });
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

function readActuator(entry: MapEntry, reading: Reading): ActuatorDefinition {
  const unit = declaredUnit(entry, reading);
  const slot = (what: string): Slot => ({ dimension: unit?.dimension, scale: 1, what });
  const of = textOf(childOf(entry.value, 'of'));
  checkActuatorSource(entry, reading);
  return {
    name: entry.key,
    place: entry.keyPlace,
    of: of?.text ?? '',
    ofPlace: of?.place ?? entry.keyPlace,
    unit: unit!,
    resolution: readExpression(
      childOf(entry.value, 'resolution'),
      { ...slot('`resolution`'), size: true },
      setting,
      reading,
    ),
    range: readRange(childOf(entry.value, 'range'), slot('`range`'), setting, reading),
  };
}

function checkActuatorSource(entry: MapEntry, reading: Reading): void {
  const of = textOf(entryOf(entry.value, 'of')?.value);
  if (of === undefined) return;
  const source = reading.names.entries.get(of.text);
  reading.names.used.add(of.text);
  reading.names.incomplete ||= source === undefined;
  if (source?.kind !== 'controller signal') {
    const known = [...reading.names.entries.values()].filter(({ kind }) => kind === 'controller signal');
    const found = source === undefined ? 'is not defined' : `is ${aKind(source.kind)}`;
    const near = suggestion(
      of.text,
      known.map(({ name }) => name),
    );
    reading.problems.add(
      of.place,
      `an actuator takes a controller signal, but \`${of.text}\` ${found}${near}`,
    );
    return;
  }
  const unit = declaredUnit(entry, reading);
  if (sameUnit(unit, source.unit)) return;
  reading.problems.add(
    of.place,
    `what actuator \`${entry.key}\` takes ${formatMismatch(source.unit!.dimension, unit!.dimension)}`,
  );
}
