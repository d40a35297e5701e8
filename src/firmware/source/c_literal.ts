import { FirmwareError, quoted } from '../failure.js';
import type { CValue } from './c_arithmetic.js';
import { type DataModel, integer, nameOf } from './c_type.js';

/** The value of a number as C writes it: with suffixes, in base 2, 8, 10 or 16, also hexadecimal floats. */
export function literalValue(written: string, model: DataModel): CValue {
  const text = written.replace(/'/g, '').toLowerCase();
  const isHex = text.startsWith('0x');
  const isFloat = isHex ? text.includes('p') : /[.e]/.test(text) || /^\d+f$/.test(text);
  const value = isFloat ? floatLiteral(text, isHex, model) : integerLiteral(text, model);
  if (!value) throw new FirmwareError('unsupported', `${quoted(written)} is no number that C knows`);
  return value;
}

function floatLiteral(text: string, isHex: boolean, model: DataModel): CValue | undefined {
  const found = (
    isHex ? /^(0x[\da-f]*\.?[\da-f]*p[+-]?\d+)([fl]?)$/ : /^(\d*\.?\d*(?:e[+-]?\d+)?)([fl]?)$/
  ).exec(text);
  if (!found || found[2] === 'l') return undefined;
  const { top, bottom } = isHex ? hexFraction(found[1]) : decimalFraction(found[1]);
  const bits = found[2] === 'f' ? 32 : model.double;
  const name = found[2] === 'f' ? 'float' : 'double';
  return {
    type: { kind: 'float', name, bits },
    value: bits === 32 ? nearestFloat32(top, bottom) : nearestFloat64(found[1], isHex, top, bottom),
  };
}

interface Fraction {
  top: bigint;
  bottom: bigint;
}

/** More digits in an exponent are no number that a float can hold. */
const mostExponent = 5000;

function decimalFraction(text: string): Fraction {
  const [digits, exponent = '0'] = text.split('e');
  const [whole, part = ''] = digits.split('.');
  return scaledFraction(BigInt(`0${whole}${part}`), 10n, Number(exponent) - part.length);
}

function hexFraction(text: string): Fraction {
  const [digits, exponent] = text.slice(2).split('p');
  const [whole, part = ''] = digits.split('.');
  return scaledFraction(BigInt(`0x0${whole}${part}`), 2n, Number(exponent) - 4 * part.length);
}

function scaledFraction(digits: bigint, base: bigint, exponent: number): Fraction {
  if (Math.abs(exponent) > mostExponent)
    throw new FirmwareError('unsupported', `an exponent of ${exponent} is beyond every float`);
  return exponent >= 0
    ? { top: digits * base ** BigInt(exponent), bottom: 1n }
    : { top: digits, bottom: base ** BigInt(-exponent) };
}

function nearestFloat64(text: string, isHex: boolean, top: bigint, bottom: bigint): number {
  if (!isHex) return Number(text.startsWith('.') ? `0${text}` : text);
  // 53 bits are exact in both parts unless the literal has more digits than a float64.
  const value = Number(top) / Number(bottom);
  if (Number.isFinite(value) && BigInt(Number(top)) === top) return value;
  throw new FirmwareError(
    'unsupported',
    `the hexadecimal float ${quoted(text)} has more digits than a float64`,
  );
}

/** The float32 nearest to a fraction: rounding twice, by way of float64, can go wrong where that lies midway between two. */
function nearestFloat32(top: bigint, bottom: bigint): number {
  const twice = fractionToFloat64(top, bottom);
  const rounded = Math.fround(twice);
  const other = Math.fround(twice + (twice - rounded));
  if (twice === rounded || other === rounded || twice - rounded !== other - twice) return rounded;
  const side = compareFraction(top, bottom, twice);
  if (side === 0) return rounded;
  return side > 0 === other > rounded ? other : rounded;
}

/** Nearest float64 of a positive fraction, by long division to 55 bits and a sticky bit. */
function fractionToFloat64(top: bigint, bottom: bigint): number {
  if (top === 0n) return 0;
  const shift = 66 - (top.toString(2).length - bottom.toString(2).length);
  const scaled = shift >= 0 ? (top << BigInt(shift)) / bottom : top / (bottom << BigInt(-shift));
  const exact =
    shift >= 0 ? scaled * bottom === top << BigInt(shift) : scaled * (bottom << BigInt(-shift)) === top;
  const mantissa = exact ? scaled : scaled | 1n;
  // 2^-shift is split in two, since it may be below the smallest float64.
  const half = Math.trunc(shift / 2);
  return Number(mantissa) * 2 ** -half * 2 ** -(shift - half);
}

/** −1, 0 or 1: where the fraction lies from a float64. */
function compareFraction(top: bigint, bottom: bigint, value: number): number {
  let [scaled, exponent] = [value, 0];
  while (!Number.isInteger(scaled) && exponent < 1100) {
    scaled *= 2;
    exponent++;
  }
  const difference = (top << BigInt(exponent)) - BigInt(scaled) * bottom;
  return difference > 0n ? 1 : difference < 0n ? -1 : 0;
}

function integerLiteral(text: string, model: DataModel): CValue | undefined {
  const found = /^(0x[\da-f]+|0b[01]+|0[0-7]*|[1-9]\d*)(u?l{0,2}|l{1,2}u)$/.exec(text);
  if (!found) return undefined;
  const digits = /^0\d/.test(found[1]) ? `0o${found[1].slice(1)}` : found[1];
  const value = BigInt(digits);
  const isDecimal = /^[1-9]/.test(found[1]);
  const longs = found[2].split('l').length - 1;
  const widths = ([model.int, model.long, 64] as const).slice(longs);
  const unsigned = found[2].includes('u');
  // C11, 6.4.4.1: the first type of the list that holds the value.
  for (const bits of widths) {
    if (!unsigned && value < 1n << BigInt(bits - 1))
      return { type: integer(nameOf(bits, true, model), bits, true), value };
    if ((unsigned || !isDecimal) && value < 1n << BigInt(bits))
      return { type: integer(nameOf(bits, false, model), bits, false), value };
  }
  return undefined;
}
