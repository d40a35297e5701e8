import { plainNumber, quotientOf, timeDimension } from './dimension.js';
import { formatMismatch } from './format_dimension.js';
import { aKind, settingRoom } from './names.js';
import { suggestion } from './nearest.js';
import { readExpression, readRange, type Slot, type Surroundings } from './read_expression.js';
import { declaredUnit } from './read_named.js';
import type { Reading } from './reading.js';
import { sameUnit } from './same_unit.js';
import type { ActuatorDefinition } from './spec.js';
import { childOf, entryOf, type MapEntry, type Tree, textOf } from './tree.js';

const setting: Surroundings = { room: settingRoom, convertsFreely: true };

/** One actuator; settings in SI. */
export function readActuator(entry: MapEntry, reading: Reading): ActuatorDefinition {
  const unit = declaredUnit(entry, reading);
  const slot = (what: string): Slot => ({ dimension: unit?.dimension, scale: 1, what });
  const size = (what: string): Slot => ({ ...slot(what), size: true, sign: 'not_negative' });
  const part = (key: string) => childOf(entry.value, key);
  const perSecond: Slot = {
    dimension: unit && quotientOf(unit.dimension, timeDimension),
    scale: 1,
    what: '`slew`',
    size: true,
    sign: 'above_zero',
  };
  const of = textOf(childOf(entry.value, 'of'));
  checkActuatorSource(entry, reading);
  return {
    name: entry.key,
    place: entry.keyPlace,
    of: of?.text ?? '',
    ofPlace: of?.place ?? entry.keyPlace,
    unit: unit!,
    resolution: readExpression(part('resolution'), size('`resolution`'), setting, reading),
    deadBand: readExpression(part('dead_band'), size('`dead_band`'), setting, reading),
    range: readRange(part('range'), slot('`range`'), setting, reading),
    slew: readExpression(part('slew'), perSecond, setting, reading),
    effect: readExpression(
      part('effect'),
      { dimension: plainNumber, scale: 1, what: '`effect`', sign: 'not_negative' },
      setting,
      reading,
    ),
    update: readWord(part('update'), 'update', ['start', 'middle'], reading),
    pwm: readPwm(entry, reading),
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

function readWord<Word extends string>(
  tree: Tree | undefined,
  key: string,
  words: readonly Word[],
  reading: Reading,
): Word | undefined {
  const text = textOf(tree);
  if (text === undefined) return undefined;
  const found = words.find((word) => word === text.text);
  if (found === undefined) {
    reading.problems.add(text.place, `\`${key}\` cannot be \`${text.text}\`${suggestion(text.text, words)}`);
  }
  return found;
}

function readPwm(entry: MapEntry, reading: Reading): ActuatorDefinition['pwm'] {
  const tree = childOf(entry.value, 'pwm');
  const pwm = readWord(tree, 'pwm', ['mean', 'ripple'], reading);
  if (pwm === 'ripple' && entryOf(entry.value, 'range') === undefined) {
    reading.problems.add(
      tree!.place,
      '`pwm: ripple` switches between the ends of a `range:`, which is missing',
    );
  }
  return pwm;
}
