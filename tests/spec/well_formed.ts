import fc from 'fast-check';
import { plainNumber, powerOf, quotientOf, sameDimension } from '../../src/spec/dimension.js';
import { unitOfDimension } from '../../src/spec/format_dimension.js';
import type { NameEntry, NameKind } from '../../src/spec/names.js';
import type { Dimension, Unit } from '../../src/spec/spec.js';
import { type ParsedUnit, parseUnit } from '../../src/spec/units.js';

/** A unit that must be one. */
export function unitOf(text: string): Unit {
  return (parseUnit(text) as ParsedUnit).unit;
}

/** Names in several units of a few dimensions, all of one kind. */
export function namesOfKind(kind: NameKind): Map<string, NameEntry> {
  const units = { a: 'V', b: 'mV', c: 'A', d: 'kA', e: 's', f: 'ms', g: 'rad', h: '%', i: 'min' };
  return new Map(
    Object.entries(units).map(([name, text]) => [
      name,
      {
        name,
        kind,
        place: { file: '', line: 1, column: 1 },
        unit: unitOf(text),
        adapts: false,
        value: undefined,
        twice: false,
        controller: undefined,
      },
    ]),
  );
}

const names = namesOfKind('sensor');
const factors: Dimension[] = ['V', 'A', 's'].map((text) => unitOf(text).dimension).concat([plainNumber]);

/** Units of a dimension that are written in the text of literals: the SI one and one with a prefix. */
function literalOf(dimension: Dimension): fc.Arbitrary<string> {
  const unit = unitOfDimension(dimension);
  const digits = fc.constantFrom('2', '0.5', '1.25', '3e1');
  if (unit === '')
    return fc.oneof(
      digits,
      digits.map((text) => `(${text} %)`),
    );
  const prefixed = unit.startsWith('1/') ? unit : `m${unit}`;
  const usable = parseUnit(prefixed).kind === 'unit' ? [unit, prefixed] : [unit];
  return fc.tuple(digits, fc.constantFrom(...usable)).map(([text, written]) => `(${text} ${written})`);
}

function leaf(dimension: Dimension): fc.Arbitrary<string> {
  const fitting = [...names.values()].filter((entry) => sameDimension(entry.unit!.dimension, dimension));
  if (fitting.length === 0) return literalOf(dimension);
  return fc.oneof(literalOf(dimension), fc.constantFrom(...fitting.map(({ name }) => name)));
}

/** Texts of expressions of a dimension, built so that every part fits; powers and divisors stay away from 0. */
export function expressionsOf(dimension: Dimension, depth: number): fc.Arbitrary<string> {
  if (depth === 0) return leaf(dimension);
  const same = fc.nat(0).chain(() => expressionsOf(dimension, depth - 1));
  const plain = fc.nat(0).chain(() => expressionsOf(plainNumber, depth - 1));
  const factor = fc.constantFrom(...factors);
  const product = factor.chain((one) =>
    fc
      .tuple(expressionsOf(one, depth - 1), expressionsOf(quotientOf(dimension, one), depth - 1))
      .map(([a, b]) => `(${a} * ${b})`),
  );
  const quotient = factor.chain((one) =>
    fc
      .tuple(
        expressionsOf(dimension, depth - 1),
        expressionsOf(one, depth - 1),
        expressionsOf(one, depth - 1),
      )
      .map(([a, b, c]) => `(${a} * ${b} / abs(${c}))`),
  );
  const root = expressionsOf(powerOf(dimension, 2), depth - 1).map((a) => `sqrt(abs(${a}))`);
  const two = (write: (a: string, b: string) => string) => fc.tuple(same, same).map(([a, b]) => write(a, b));
  return fc.oneof(
    leaf(dimension),
    two((a, b) => `(${a} + ${b})`),
    two((a, b) => `(${a} - ${b})`),
    two((a, b) => `max(${a}, ${b})`),
    two((a, b) => `hypot(${a}, ${b})`),
    two((a, b) => `min(${a}, ${b}, ${b})`),
    same.map((a) => `-${a}`),
    same.map((a) => `max(0, ${a})`),
    fc.tuple(plain, same).map(([a, b]) => `(tanh(${a}) * ${b})`),
    fc.tuple(plain, same, same).map(([a, b, c]) => `if(${a} > (50 %), ${b}, ${c})`),
    two((a, b) => `(sign(${a}) * ${b})`),
    product,
    quotient,
    root,
  );
}
