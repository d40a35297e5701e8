import { plainNumber, quotientOf, timeDimension } from './dimension.js';
import { plantRoom, settingRoom } from './names.js';
import {
  type Free,
  fit,
  numberOf,
  readExpression,
  readFree,
  readRange,
  type Slot,
  type Surroundings,
} from './read_expression.js';
import { readCorner, readTimeConstant } from './read_frequency.js';
import { declaredUnit } from './read_named.js';
import { readQuantity } from './read_quantity.js';
import { missing, type Reading } from './reading.js';
import type { Expression, SensorDefinition } from './spec.js';
import { childOf, type MapEntry, type Tree } from './tree.js';

const plant: Surroundings = { room: plantRoom, convertsFreely: true };
const setting: Surroundings = { room: settingRoom, convertsFreely: true };

/** One sensor; settings in SI. */
export function readSensor(entry: MapEntry, reading: Reading): SensorDefinition {
  const part = (key: string) => childOf(entry.value, key);
  const unit = declaredUnit(entry, reading);
  const own = (key: string): Slot => ({ dimension: unit?.dimension, scale: 1, what: `\`${key}\`` });
  const size = (key: string): Slot => ({ ...own(key), size: true });
  const perSecond = (key: string): Slot => ({
    ...size(key),
    dimension: unit && quotientOf(unit.dimension, timeDimension),
  });
  const noise = noiseParts(part('noise'));
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
    drift: readExpression(part('drift'), perSecond('drift'), setting, reading),
    deadTime: readExpression(
      part('dead_time'),
      { ...time('dead_time'), sign: 'not_negative' },
      setting,
      reading,
    ),
    noise: readExpression(noise.deviation, { ...size('noise'), sign: 'not_negative' }, setting, reading),
    noiseCorner: readCorner(noise.corner, '`corner`', setting, reading),
    range: readRange(part('range'), own('range'), setting, reading),
    quantum: readExpression(part('quantum'), { ...size('quantum'), sign: 'not_negative' }, setting, reading),
    drops: readDrops(part('drops'), reading),
    stuck: readStuck(part('stuck'), time, reading),
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

/** `noise:` is a deviation, or a mapping with one and a corner. */
function noiseParts(tree: Tree | undefined): { deviation: Tree | undefined; corner: Tree | undefined } {
  if (tree?.kind !== 'map') return { deviation: tree, corner: undefined };
  return { deviation: childOf(tree, 'deviation'), corner: childOf(tree, 'corner') };
}

function readDrops(tree: Tree | undefined, reading: Reading): number | undefined {
  const share = readQuantity(tree, plainNumber, '`drops`', reading);
  if (share !== undefined && !(share.value >= 0 && share.value < 0.5)) {
    reading.problems.add(
      share.place,
      `\`drops\` must be from 0 % to below 50 %, but is ${share.value * 100} %`,
    );
  }
  return share?.value;
}

function readStuck(
  tree: Tree | undefined,
  time: (key: string) => Slot,
  reading: Reading,
): SensorDefinition['stuck'] {
  if (tree === undefined) return undefined;
  const [from, to] = ['from', 'to'].map((key) =>
    readExpression(childOf(tree, key), time(key), setting, reading),
  );
  const times = [from, to].map((time) => time && numberOf(time));
  if (times[0] !== undefined && times[1] !== undefined && times[0] >= times[1]) {
    reading.problems.add(tree.place, '`stuck` ends before it begins: `to` must be later than `from`');
  }
  return { from: from ?? missing(tree.place), to: to ?? missing(tree.place) };
}

const time = (key: string): Slot => ({ dimension: timeDimension, scale: 1, what: `\`${key}\`` });
