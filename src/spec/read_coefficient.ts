import { plainNumber } from './dimension.js';
import { evaluateExpression } from './evaluate_expression.js';
import type { Room } from './names.js';
import { readAddress } from './read_address.js';
import { readExpression } from './read_expression.js';
import { declareEntry } from './read_named.js';
import { readUnit, readWhole } from './read_quantity.js';
import type { Reading } from './reading.js';
import type { CoefficientDefinition } from './spec.js';
import { childOf, entryOf, itemsOf, type MapEntry, type Tree, textOf } from './tree.js';

const scalingRoom: Room = {
  sees: ['constant'],
  words: 'the scale or offset of a coefficient',
  si: true,
  mayLookBack: false,
};

/** More elements than this are no coefficient. */
const mostElements = 2 ** 20;

/** A coefficient: where a number is in the build, what its bits mean, and in which unit the firmware holds it. */
export function readCoefficient(entry: MapEntry, reading: Reading): CoefficientDefinition {
  const { key: name, keyPlace: place, value: tree } = entry;
  const unitTree = childOf(tree, 'unit');
  const at = textOf(tree) ?? textOf(childOf(tree, 'at'));
  const unit = unitTree && readUnit(unitTree, reading);
  declareEntry(entry, 'coefficient', unit, reading, { adapts: unitTree === undefined });
  checkWhere(entry, reading);
  const address = readAddress(childOf(tree, 'address'), '`address`', reading);
  return {
    name,
    place,
    at: at?.text ?? '',
    atPlace: at?.place ?? address?.place ?? place,
    format: textOf(childOf(tree, 'format'))?.text,
    unit,
    scale: readFactor(tree, 'scale', reading),
    offset: readFactor(tree, 'offset', reading),
    startsAtZero: readTruth(childOf(tree, 'starts_at_zero'), '`starts_at_zero`', reading),
    address: address?.value,
    count: readWhole(childOf(tree, 'count'), { least: 1, most: mostElements }, '`count`', reading),
  };
}

/** A coefficient is named, or given by its address; then nothing but the spec says what stands there. */
function checkWhere({ keyPlace, value: tree }: MapEntry, { problems, strange }: Reading): void {
  if (tree.kind !== 'map' || strange.has(tree)) return;
  const [at, address] = [entryOf(tree, 'at'), entryOf(tree, 'address')];
  if (!at && !address) {
    problems.add(
      keyPlace,
      '`at` is missing; expected where it is in the build, such as drive.gains.kp, or else `address`',
    );
  }
  if (at && address)
    problems.add(address.keyPlace, '`address` cannot stand beside `at`: one of them says where it is');
  if (address && !entryOf(tree, 'format'))
    problems.add(address.keyPlace, '`address` needs `format`, such as float32 or Q2.14');
  const count = entryOf(tree, 'count');
  if (count && !address)
    problems.add(count.keyPlace, '`count` belongs to `address`; a name knows how many numbers it has');
}

/** A plain number such as 0.01 or 1/256, or a list with one for each element. */
function readFactor(tree: Tree, key: 'scale' | 'offset', reading: Reading): number | number[] | undefined {
  const given = childOf(tree, key);
  if (given === undefined) return undefined;
  if (given.kind !== 'list') return readPlain(given, key, reading);
  return itemsOf(given).map((item) => readPlain(item, key, reading) ?? Number.NaN);
}

function readPlain(tree: Tree, key: 'scale' | 'offset', reading: Reading): number | undefined {
  const slot = { dimension: plainNumber, scale: 1, what: `\`${key}\`` };
  const expression = readExpression(tree, slot, { room: scalingRoom, convertsFreely: true }, reading);
  const { entries } = reading.names;
  const value =
    expression && evaluateExpression(expression, (name) => entries.get(name)?.value ?? Number.NaN);
  if (value === Number.POSITIVE_INFINITY || value === Number.NEGATIVE_INFINITY)
    reading.problems.add(tree.place, `\`${key}\` must be a finite number`);
  if (key === 'scale' && value === 0)
    reading.problems.add(tree.place, '`scale` cannot be 0: every number would be the same');
  return value;
}

function readTruth(tree: Tree | undefined, what: string, reading: Reading): boolean | undefined {
  const text = textOf(tree);
  if (text === undefined) return undefined;
  if (text.text === 'true' || text.text === 'false') return text.text === 'true';
  reading.problems.add(text.place, `${what} must be true or false, but is \`${text.text}\``);
  return undefined;
}
