import { isPlain, plainNumber, sameDimension } from './dimension.js';
import { formatMismatch, unitOfDimension } from './format_dimension.js';
import { parseExpression } from './parse_expression.js';
import type { Reading } from './reading.js';
import type { Dimension, Place, Quantity, Unit } from './spec.js';
import type { Syntax } from './syntax.js';
import type { TextTree, Tree } from './tree.js';
import { prefixHint } from './unit_hints.js';
import { kelvin, parseUnit, plainUnit } from './units.js';

/** A quantity as written: `relative` where it is a percentage, `decibel` where it was a level, `celsius` where in degC. */
export interface ReadQuantity extends Quantity {
  relative: boolean;
  decibel: boolean;
  celsius: boolean;
}

/**
 * Reads a fixed quantity: a number, a number with a unit, or the name of a constant. Undefined where there is none or
 * it is wrong (then reported). A bare 0 fits every unit.
 *
 * @param expected its dimension; undefined where any will do or it is not known.
 * @param what the slot, for errors.
 */
export function readQuantity(
  tree: Tree | undefined,
  expected: Dimension | undefined,
  what: string,
  reading: Reading,
): ReadQuantity | undefined {
  if (tree?.kind !== 'text') return undefined;
  const syntax = parseExpression(tree.source);
  if (syntax.kind === 'fault') {
    reading.problems.add(tree.placeAt(syntax.at), syntax.message);
    return undefined;
  }
  const quantity = fixed(syntax, tree, reading);
  if (quantity === undefined) return undefined;
  if (quantity.celsius) {
    reading.problems.add(
      quantity.place,
      `${what} is a difference of temperatures, which is in K; degC is a temperature`,
    );
    return undefined;
  }
  return fitted(quantity, expected, what, reading);
}

/** Like readQuantity, for a value that is a point on its scale and not a size: a temperature may be in degC. */
export function readPoint(
  tree: Tree | undefined,
  expected: Dimension | undefined,
  what: string,
  reading: Reading,
): ReadQuantity | undefined {
  const syntax = tree?.kind === 'text' ? parseExpression(tree.source) : undefined;
  const celsius = syntax?.kind === 'quantity' && syntax.unit.law === 'celsius';
  if (tree?.kind !== 'text' || !celsius) return readQuantity(tree, expected, what, reading);
  const place = tree.placeAt(syntax.at);
  const quantity = {
    value: syntax.value,
    unit: kelvin,
    relative: false,
    decibel: false,
    celsius: false,
    place,
  };
  return fitted(quantity, expected, what, reading);
}

/** Reads a plain number such as `5 %` or 0.05. */
export function readShare(tree: Tree | undefined, what: string, reading: Reading): number | undefined {
  return readQuantity(tree, plainNumber, what, reading)?.value;
}

/** Reads a whole number from `least` to `most`. */
export function readWhole(
  tree: Tree | undefined,
  bounds: { least: number; most: number },
  what: string,
  reading: Reading,
): number | undefined {
  if (tree?.kind !== 'text') return undefined;
  const value = Number(tree.text);
  if (/^\d+$/.test(tree.text) && value >= bounds.least && value <= bounds.most) return value;
  reading.problems.add(
    tree.place,
    `${what} must be a whole number from ${bounds.least} to ${bounds.most}, but is \`${tree.text}\``,
  );
  return undefined;
}

/** Reads a declared unit; plain where none is given, undefined where it is wrong. */
export function readUnit(tree: Tree | undefined, reading: Reading): Unit | undefined {
  if (tree === undefined) return plainUnit;
  if (tree.kind !== 'text') return undefined;
  const unit = parseUnit(tree.source);
  if (unit.kind === 'fault') {
    reading.problems.add(tree.placeAt(unit.at), unit.message);
    return undefined;
  }
  if (unit.law === undefined) return unit.unit;
  reading.problems.add(
    tree.place,
    unit.law === 'decibel'
      ? 'a signal cannot be in dB: only a number can, as in 6 dB; use a plain ratio'
      : 'a signal cannot be in degC: only a number can, as in 20 degC; use K',
  );
  return undefined;
}

function fixed(syntax: Syntax, tree: TextTree, reading: Reading): ReadQuantity | undefined {
  const place = tree.placeAt(syntax.at);
  const whole = { relative: false, decibel: false, celsius: false, place };
  if (syntax.kind === 'number') return { ...whole, value: syntax.value, unit: plainUnit };
  if (syntax.kind === 'quantity') {
    const { unit, law } = syntax.unit;
    const [decibel, celsius] = [law === 'decibel', law === 'celsius'];
    return { ...whole, value: syntax.value, unit, decibel, celsius, relative: unit.text === '%' };
  }
  if (syntax.kind === 'negate') {
    const of = fixed(syntax.of, tree, reading);
    return of && { ...of, value: -of.value, place };
  }
  return constant(syntax, place, reading);
}

function constant(syntax: Syntax, place: Place, reading: Reading): ReadQuantity | undefined {
  const entry = syntax.kind === 'name' ? reading.names.entries.get(syntax.name) : undefined;
  if (syntax.kind === 'name') reading.names.used.add(syntax.name);
  if (entry?.kind !== 'constant') {
    reading.problems.add(place, 'expected a number with its unit, or the name of a constant');
    return undefined;
  }
  if (entry.value === undefined || entry.unit === undefined) return undefined;
  return { value: entry.value, unit: entry.unit, relative: false, decibel: false, celsius: false, place };
}

function fitted(
  quantity: ReadQuantity,
  expected: Dimension | undefined,
  what: string,
  reading: Reading,
): ReadQuantity | undefined {
  const { dimension, text } = quantity.unit;
  if (expected === undefined || sameDimension(dimension, expected)) return quantity;
  if (quantity.value === 0 && isPlain(dimension) && text === '') {
    return { ...quantity, unit: { text: unitOfDimension(expected), dimension: expected, scale: 1 } };
  }
  reading.problems.add(
    quantity.place,
    `${what} ${formatMismatch(dimension, expected)}${prefixHint(text, expected)}`,
  );
  return undefined;
}
