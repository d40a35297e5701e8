import { timeDimension } from './dimension.js';
import { readQuantity } from './read_quantity.js';
import type { Reading } from './reading.js';
import type { Dimension } from './spec.js';
import type { BoundPoint } from './statement.js';
import { itemsOf, type Tree } from './tree.js';

/** Reads the corners of a bound, `[[0 s, 1 V], [2 s, 1.1 V]]`, in order of time. */
export function readBound(
  tree: Tree,
  dimension: Dimension | undefined,
  what: string,
  reading: Reading,
): BoundPoint[] {
  const points: BoundPoint[] = [];
  for (const item of itemsOf(tree)) {
    const [timeTree, valueTree] = itemsOf(item);
    const time = readQuantity(timeTree, timeDimension, `a time of ${what}`, reading);
    const value = readQuantity(valueTree, dimension, `a value of ${what}`, reading);
    if (time === undefined || value === undefined) continue;
    const before = points.at(-1);
    if (before !== undefined && time.value < before.time) {
      reading.problems.add(time.place, `the corners of ${what} come in order of time`);
    }
    points.push({ time: time.value, value: value.value });
  }
  if (tree.kind === 'list' && tree.items.length < 2) {
    reading.problems.add(
      tree.place,
      `${what} needs at least two corners, such as [[0 s, 1 V], [2 s, 1.1 V]]`,
    );
  }
  return points;
}
