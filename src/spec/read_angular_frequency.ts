import { frequencyDimension, rateDimension, sameDimension } from './dimension.js';
import { formatDimension } from './format_dimension.js';
import { type ReadQuantity, readQuantity } from './read_quantity.js';
import type { Reading } from './reading.js';
import type { Tree } from './tree.js';

/**
 * Reads a fixed angular frequency in rad/s: as one, or as a frequency in Hz, which is multiplied by 2π. Its unit stays the
 * one that was written, with what one of it is in rad/s. Undefined where there is none or it is wrong (then reported).
 */
export function readAngularFrequency(
  tree: Tree | undefined,
  what: string,
  reading: Reading,
): ReadQuantity | undefined {
  const quantity = readQuantity(tree, undefined, what, reading);
  if (quantity === undefined || sameDimension(quantity.unit.dimension, rateDimension)) return quantity;
  const { unit, value } = quantity;
  if (sameDimension(unit.dimension, frequencyDimension)) {
    const turned = { ...unit, dimension: rateDimension, scale: 2 * Math.PI * unit.scale };
    return { ...quantity, value: 2 * Math.PI * value, unit: turned };
  }
  if (value === 0 && unit.text === '') return quantity;
  reading.problems.add(
    quantity.place,
    `${what} must be a frequency in Hz or rad/s, but this is ${formatDimension(unit.dimension)}`,
  );
  return undefined;
}
