import fc from 'fast-check';
import { expect, test } from 'vitest';
import { plainNumber, powerOf, productOf, quotientOf, sameDimension } from '../../src/spec/dimension.js';
import { formatDimension, unitOfDimension } from '../../src/spec/format_dimension.js';
import { prefixHint } from '../../src/spec/unit_hints.js';
import { unitSymbols } from '../../src/spec/unit_table.js';
import { type ParsedUnit, parseUnit, siValue } from '../../src/spec/units.js';

function unit(text: string): ParsedUnit {
  const parsed = parseUnit(text);
  if (parsed.kind === 'fault') throw new Error(parsed.message);
  return parsed;
}

function fault(text: string): string {
  const parsed = parseUnit(text);
  if (parsed.kind === 'unit') throw new Error(`${text} is a unit`);
  return `${parsed.at}: ${parsed.message}`;
}

// SI Brochure, 9th edition (2019), tables 4 and 8: derived units in base units, and units accepted beside the SI.
test.each([
  ['N', 'kg*m/s^2', 1],
  ['Pa', 'N/m^2', 1],
  ['J', 'N*m', 1],
  ['W', 'J/s', 1],
  ['C', 'A*s', 1],
  ['V', 'W/A', 1],
  ['F', 'C/V', 1],
  ['ohm', 'V/A', 1],
  ['S', 'A/V', 1],
  ['Wb', 'V*s', 1],
  ['T', 'Wb/m^2', 1],
  ['H', 'Wb/A', 1],
  ['lx', 'lm/m^2', 1],
  ['Hz', 'cycle/s', 1],
  ['min', 's', 60],
  ['h', 's', 3600],
  ['L', 'm^3', 1e-3],
  ['t', 'kg', 1e3],
  ['g', 'kg', 1e-3],
  ['bar', 'Pa', 1e5],
  ['km/h', 'm/s', 1 / 3.6],
  ['deg', 'rad', Math.PI / 180],
  ['arcmin', 'deg', 1 / 60],
  ['arcsec', 'arcmin', 1 / 60],
])('%s is %s times %d', (text, base, factor) => {
  expect(unit(text).unit.dimension).toEqual(unit(base).unit.dimension);
  expect(unit(text).unit.scale / unit(base).unit.scale).toBeCloseTo(factor, 14);
});

test('an angle in radians is a plain number, a cycle is not', () => {
  expect(unit('rad').unit.dimension).toEqual(plainNumber);
  expect(unit('bit').unit.dimension).toEqual(plainNumber);
  expect(unit('cycle').unit.dimension).not.toEqual(plainNumber);
  expect(unit('Hz').unit.dimension).not.toEqual(unit('rad/s').unit.dimension);
});

test('rpm is 2π/60 rad/s', () => {
  expect(unit('rpm').unit.dimension).toEqual(unit('rad/s').unit.dimension);
  expect(siValue('60', unit('rpm'))).toBeCloseTo(2 * Math.PI, 14);
});

test('% is a hundredth, dB is 20·log10 of an amplitude ratio', () => {
  expect(siValue('25', unit('%'))).toBe(0.25);
  expect(siValue('20', unit('dB'))).toBe(10);
  expect(siValue('-6', unit('dB'))).toBeCloseTo(0.5012, 4);
});

test('decimal units convert without a rounding of their own', () => {
  expect(siValue('400', unit('us'))).toBe(0.0004);
  expect(siValue('0.4', unit('ms'))).toBe(0.0004);
  expect(siValue('1.1', unit('mm^2'))).toBe(1.1e-6);
  expect(siValue('3e2', unit('km'))).toBe(3e5);
  expect(siValue('36', unit('km/h'))).toBe(10);
  expect(siValue('4.7', unit('µF'))).toBe(4.7e-6);
});

test('an exact symbol goes before a prefix: min, cd and Pa are no milli-inch, centi-day or peta-ampere', () => {
  expect(unit('min').unit.scale).toBe(60);
  expect(unit('cd').unit.dimension).not.toEqual(unit('s').unit.dimension);
  expect(unit('Pa').unit.scale).toBe(1);
  expect(unit('mm').unit.scale).toBe(1e-3);
  expect(unit('dam').unit.scale).toBe(10);
});

test.each([
  ['', '0: a unit was expected here'],
  ['foo', '0: unknown unit `foo`'],
  ['Nm', '0: unknown unit `Nm`; did you mean `N*m`?'],
  ['sec', '0: unknown unit `sec`'],
  ['seconds', '0: unknown unit `seconds`; it is written `s`'],
  ['hz', '0: unknown unit `hz`; did you mean `Hz`?'],
  ['k', '0: `k` is a prefix without its unit, as in `ks` or `kV`'],
  ['V*', '2: a unit was expected here'],
  ['V*/s', '2: `/s` is not a unit'],
  ['m^x', '2: after ^ a unit needs a number such as 2 or -1'],
  ['m^0', '2: after ^ a unit needs a number such as 2 or -1'],
  ['m^99', '2: after ^ a unit needs a number such as 2 or -1'],
  ['J/kg*K', '4: `J/kg*K` can be read in two ways; put what is divided by in parentheses, as in J/(kg*K)'],
  ['J/(kg*K', '2: this parenthesis of the unit is not closed'],
  ['V)', '1: unexpected `)` in the unit `V)`'],
  ['((((((((((m))))))))))', '8: a unit nested more than 8 parentheses deep'],
  ['J/degC', '2: degC stands alone; in a product a difference of temperatures is in K'],
  ['dB/m', '0: dB stands alone: it is a ratio by itself and takes no part in a product'],
  ['kmin', '0: unknown unit `kmin`; did you mean `min`?'],
  ['3 V', '0: `3 V` is not a unit'],
])('"%s" is no unit', (text, message) => {
  expect(fault(text)).toBe(message);
});

test.each([
  ['N*m', 'N*m'],
  ['J', 'N*m'],
  ['rad/s', '1/s (rad/s)'],
  ['rad', 'a plain number'],
  ['kg*m/s^2', 'N'],
  ['kg*m^2', 'kg*m^2'],
  ['N*m*s', 'N*m*s'],
  ['m/s^2', 'm/s^2'],
  ['V^2', 'V^2'],
  ['A/V', 'A/V'],
  ['V*s', 'V*s'],
  ['W/K', 'W/K'],
  ['J/(kg*K)', 'm^2/(s^2*K)'],
  ['Hz', 'Hz'],
  ['m^0.5', 'm^0.5'],
  ['1/m', '1/m'],
])('%s reads as %s', (text, words) => {
  expect(formatDimension(unit(text).unit.dimension)).toBe(words);
});

const anyUnit = fc
  .array(fc.tuple(fc.constantFrom(...unitSymbols), fc.integer({ min: -3, max: 3 })), {
    minLength: 1,
    maxLength: 4,
  })
  .map((factors) => factors.filter(([, power]) => power !== 0))
  .filter((factors) => factors.length > 0);

test('a product of powers has the product of the dimensions and of the scales', () => {
  fc.assert(
    fc.property(anyUnit, (factors) => {
      const text = factors.map(([{ symbol }, power]) => `${symbol}^${power}`).join('*');
      const product = unit(text).unit;
      const dimension = factors.reduce(
        (sum, [symbol, power]) => productOf(sum, powerOf(symbol.dimension, power)),
        plainNumber,
      );
      const scale = factors.reduce(
        (all, [{ times, over, tens }, power]) => all * ((times / over) * 10 ** tens) ** power,
        1,
      );
      expect(sameDimension(product.dimension, dimension)).toBe(true);
      expect(product.scale / scale).toBeCloseTo(1, 12);
    }),
  );
});

test('the unit of a dimension can be read again', () => {
  fc.assert(
    fc.property(anyUnit, (factors) => {
      const { dimension } = unit(factors.map(([{ symbol }, power]) => `${symbol}^${power}`).join('*')).unit;
      fc.pre(dimension.every((exponent) => Math.abs(exponent) <= 12));
      const text = unitOfDimension(dimension);
      if (text === '') expect(dimension).toEqual(plainNumber);
      else expect(unit(text).unit).toMatchObject({ dimension, scale: 1 });
    }),
  );
});

test('dimensions: a quotient undoes a product, a root undoes a power', () => {
  const exponents = fc.array(fc.integer({ min: -6, max: 6 }), { minLength: 8, maxLength: 8 });
  fc.assert(
    fc.property(exponents, exponents, fc.integer({ min: 1, max: 4 }), (a, b, n) => {
      expect(sameDimension(quotientOf(productOf(a, b), b), a)).toBe(true);
      expect(sameDimension(powerOf(powerOf(a, n), 1 / n), a)).toBe(true);
    }),
  );
});

test('any text is a unit or a fault inside it', () => {
  fc.assert(
    fc.property(fc.string({ maxLength: 30 }), (text) => {
      const parsed = parseUnit(text);
      if (parsed.kind === 'unit') expect(parsed.unit.scale).toBeGreaterThan(0);
      else expect(parsed.at).toBeLessThanOrEqual(text.length);
    }),
  );
});

test.each([
  ['m', 's', '; was `ms` meant?'],
  ['ms', 'm/s', '; was `m/s` meant?'],
  ['m/s', 's', '; was `ms` meant?'],
  ['S', 's', '; was `s` meant?'],
  ['mN', 'N*m', '; was `m*N` meant?'],
  ['V', 'A', ''],
])('%s where %s is expected', (written, expected, hint) => {
  expect(prefixHint(written, unit(expected).unit.dimension)).toBe(hint);
});

test('no symbol stands twice, and no symbol is another one with a prefix', () => {
  const symbols = unitSymbols.map(({ symbol }) => symbol);
  expect(new Set(symbols).size).toBe(symbols.length);
});
