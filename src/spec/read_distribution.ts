import { suggestion } from './nearest.js';
import { type ReadQuantity, readQuantity } from './read_quantity.js';
import type { Reading } from './reading.js';
import type { Distribution, ParameterDefinition } from './spec.js';
import { childOf, entryOf, itemsOf, type Tree, textOf } from './tree.js';

const words = ['uniform', 'normal', 'triangular', 'log_uniform'] as const;

/** How a parameter is spread between its bounds; undefined where nothing is said, or it is wrong and reported. */
export function readDistribution(
  tree: Tree,
  { name, nominal, low, high, unit }: ParameterDefinition,
  reading: Reading,
): Distribution | undefined {
  const entry = entryOf(tree, 'distribution');
  const word = textOf(entry?.value);
  const deviation = entryOf(tree, 'deviation');
  if (childOf(tree, 'values') !== undefined) {
    for (const other of [entry, deviation]) {
      if (other) {
        reading.problems.add(
          other.keyPlace,
          `\`${name}\` takes one of its values, each as likely, and cannot have \`${other.key}\``,
        );
      }
    }
    return { kind: 'values', values: listOf(tree, unit.dimension, reading) };
  }
  const kind = words.find((known) => known === word?.text);
  if (word !== undefined && kind === undefined) {
    reading.problems.add(word.place, `unknown distribution \`${word.text}\`${suggestion(word.text, words)}`);
    return undefined;
  }
  if (deviation !== undefined && kind !== 'normal') {
    reading.problems.add(deviation.keyPlace, '`deviation` belongs to `distribution: normal` alone');
  }
  if (kind === 'normal') return normal(tree, name, nominal, unit.dimension, word!.place, reading);
  if (kind === 'log_uniform' && !(low > 0)) {
    reading.problems.add(
      word!.place,
      `a logarithmic distribution needs bounds above 0, but \`${name}\` goes from ${low} to ${high} (SI)`,
    );
  }
  return kind && { kind };
}

function normal(
  tree: Tree,
  name: string,
  nominal: number,
  dimension: readonly number[],
  place: Tree['place'],
  reading: Reading,
): Distribution | undefined {
  const given = childOf(tree, 'deviation');
  if (given === undefined) {
    reading.problems.add(
      place,
      `a normal distribution needs \`deviation:\`, the standard deviation of \`${name}\`, as a share in % or a quantity`,
    );
    return undefined;
  }
  const free = readQuantity(given, undefined, '`deviation`', reading);
  const relative = free?.relative && nominal !== 0;
  const deviation = relative ? free : readQuantity(given, dimension, '`deviation`', reading);
  if (deviation === undefined) return undefined;
  const size = relative ? deviation.value * Math.abs(nominal) : deviation.value;
  if (size > 0) return { kind: 'normal', deviation: size };
  reading.problems.add(given.place, 'a standard deviation must be above 0');
  return undefined;
}

function listOf(tree: Tree, dimension: readonly number[], reading: Reading): number[] {
  const quantities = itemsOf(childOf(tree, 'values')).map((item) =>
    readQuantity(item, dimension, '`values`', reading),
  );
  return quantities.flatMap((one) => (one === undefined ? [] : [one.value])).sort((a, b) => a - b);
}

/** The values that a parameter can take, in ascending order, SI; undefined where they are wrong and reported. */
export function valuesGiven(
  name: string,
  tree: Tree,
  nominal: ReadQuantity,
  reading: Reading,
): number[] | undefined {
  const list = childOf(tree, 'values')!;
  const values = listOf(tree, nominal.unit.dimension, reading);
  if (values.length !== itemsOf(list).length) return undefined;
  if (new Set(values).size !== values.length) {
    reading.problems.add(list.place, `the values of \`${name}\` hold one of them twice`);
  }
  if (values.includes(nominal.value)) return values;
  reading.problems.add(nominal.place, `the nominal value of \`${name}\` is not one of its values`);
  return undefined;
}
