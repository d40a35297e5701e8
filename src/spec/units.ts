import { timesTenTo } from './decimal.js';
import { plainNumber, powerOf, productOf, quotientOf } from './dimension.js';
import { suggestion } from './nearest.js';
import type { Dimension, Unit } from './spec.js';
import { prefixes, unitSymbols } from './unit_table.js';

/** The size of a unit in SI: `times / over · 10^tens`. */
interface Size {
  dimension: Dimension;
  times: number;
  over: number;
  tens: number;
}

/**
 * A unit that was understood. Two are no scale but a law, and only a number can be in them: `decibel`, 20·log10 of an
 * amplitude ratio, and `celsius`, a temperature counted from 273.15 K.
 */
export interface ParsedUnit extends Size {
  kind: 'unit';
  unit: Unit;
  law: 'decibel' | 'celsius' | undefined;
}

/** Why a text is no unit; `at` is the index of the fault in the text. */
export interface UnitFault {
  kind: 'fault';
  message: string;
  at: number;
}

/** The unit of plain numbers. */
export const plainUnit: Unit = { text: '', dimension: plainNumber, scale: 1 };

/** The unit that a temperature in degC is converted to. */
export const kelvin: Unit = { text: 'K', dimension: [0, 0, 0, 0, 1, 0, 0, 0], scale: 1 };

const one: Size = { dimension: plainNumber, times: 1, over: 1, tens: 0 };
const symbolTable = new Map(unitSymbols.map((symbol) => [symbol.symbol, symbol]));
const largestExponent = 60;

/**
 * Reads a unit: symbols with SI prefixes, joined by `*` and `/`, with powers (`kg*m^2`, `N*m*s/rad`, `1/s`,
 * `J/(kg*K)`). What follows a `/` needs parentheses when it is a product (SI Brochure, 9th edition, 5.2).
 */
export function parseUnit(text: string): ParsedUnit | UnitFault {
  const trimmed = text.trim();
  if (trimmed === 'dB') return parsed('dB', one, 'decibel');
  if (trimmed === 'degC' || trimmed === '°C') {
    return parsed('degC', { ...one, dimension: kelvin.dimension }, 'celsius');
  }
  const reader = { text, at: 0, depth: 0 };
  try {
    const size = product(reader);
    skipSpace(reader);
    if (reader.at < text.length) {
      throw new Fault(`unexpected \`${text[reader.at]}\` in the unit \`${trimmed}\``, reader.at);
    }
    return parsed(trimmed, size, undefined);
  } catch (error) {
    if (error instanceof Fault) return { kind: 'fault', message: error.message, at: error.at };
    throw error;
  }
}

/** The SI value of a number written in a unit; `digits` is the number as written. */
export function siValue(digits: string, unit: ParsedUnit): number {
  if (unit.law === 'decibel') return 10 ** (Number(digits) / 20);
  if (unit.law === 'celsius') return Number(digits) + 273.15;
  return (timesTenTo(digits, unit.tens) * unit.times) / unit.over;
}

function parsed(text: string, size: Size, law: ParsedUnit['law']): ParsedUnit {
  const scale = (Number(`1e${size.tens}`) * size.times) / size.over;
  return { kind: 'unit', ...size, law, unit: { text, dimension: size.dimension, scale } };
}

class Fault extends Error {
  constructor(
    message: string,
    readonly at: number,
  ) {
    super(message);
  }
}

interface Reader {
  text: string;
  at: number;
  depth: number;
}

function product(reader: Reader): Size {
  let size = factor(reader);
  let divided = false;
  for (;;) {
    skipSpace(reader);
    const operator = reader.text[reader.at];
    if (operator !== '*' && operator !== '/') return size;
    if (operator === '*' && divided) {
      const message = `\`${reader.text.trim()}\` can be read in two ways; put what is divided by in parentheses, as in J/(kg*K)`;
      throw new Fault(message, reader.at);
    }
    reader.at += 1;
    const right = factor(reader);
    divided ||= operator === '/';
    size = operator === '*' ? multiplied(size, right) : multiplied(size, raised(right, -1));
  }
}

function factor(reader: Reader): Size {
  skipSpace(reader);
  const base = reader.text[reader.at] === '(' ? parenthesised(reader) : symbol(reader);
  skipSpace(reader);
  if (reader.text[reader.at] !== '^') return base;
  reader.at += 1;
  return raised(base, exponent(reader));
}

function parenthesised(reader: Reader): Size {
  const opened = reader.at;
  reader.depth += 1;
  if (reader.depth > 8) throw new Fault('a unit nested more than 8 parentheses deep', opened);
  reader.at += 1;
  const inner = product(reader);
  skipSpace(reader);
  if (reader.text[reader.at] !== ')') throw new Fault('this parenthesis of the unit is not closed', opened);
  reader.at += 1;
  reader.depth -= 1;
  return inner;
}

function symbol(reader: Reader): Size {
  const found = /^(?:1(?=\s*\/)|[A-Za-zµμΩ°%]+)/u.exec(reader.text.slice(reader.at));
  if (found === null) {
    const rest = reader.text.slice(reader.at).trim();
    throw new Fault(rest === '' ? 'a unit was expected here' : `\`${rest}\` is not a unit`, reader.at);
  }
  const size = found[0] === '1' ? one : lookUp(found[0]);
  if (size === undefined) throw new Fault(unknownUnit(found[0]), reader.at);
  reader.at += found[0].length;
  return size;
}

function exponent(reader: Reader): number {
  const found = /^\s*(-?\d+(?:\.\d+)?)/.exec(reader.text.slice(reader.at));
  const value = found === null ? Number.NaN : Number(found[1]);
  if (found === null || Math.abs(value) > largestExponent || value === 0) {
    throw new Fault('after ^ a unit needs a number such as 2 or -1', reader.at);
  }
  reader.at += found[0].length;
  return value;
}

function lookUp(text: string): Size | undefined {
  const whole = symbolTable.get(text);
  if (whole !== undefined) return whole;
  for (const [prefix, tens] of Object.entries(prefixes)) {
    if (!text.startsWith(prefix)) continue;
    const base = symbolTable.get(text.slice(prefix.length));
    if (base?.prefixed) return { ...base, tens: base.tens + tens };
  }
  return undefined;
}

function unknownUnit(text: string): string {
  if (text === 'dB') return 'dB stands alone: it is a ratio by itself and takes no part in a product';
  if (text === 'degC' || text === '°C')
    return 'degC stands alone; in a product a difference of temperatures is in K';
  if (Object.hasOwn(prefixes, text))
    return `\`${text}\` is a prefix without its unit, as in \`${text}s\` or \`${text}V\``;
  const spelled = spelledOut(text);
  if (spelled !== undefined) return `unknown unit \`${text}\`; it is written \`${spelled}\``;
  const joined = joinedUnits(text);
  if (joined !== undefined) return `unknown unit \`${text}\`; did you mean \`${joined}\`?`;
  return `unknown unit \`${text}\`${suggestion(text, [...symbolTable.keys(), ...common])}`;
}

/** Prefixed units that are often mistyped, offered beside the bare symbols. */
const common = [
  'ms',
  'us',
  'mm',
  'km',
  'kg',
  'kHz',
  'MHz',
  'mV',
  'kV',
  'mA',
  'kW',
  'kPa',
  'mrad',
  'kohm',
  'uF',
];

/** The symbol of a unit written as a word: volt, seconds. */
function spelledOut(text: string): string | undefined {
  const word = text.toLowerCase().replace(/s$/, '');
  return unitSymbols.find(({ meaning, symbol }) => /^[a-z]+/.exec(meaning)?.[0] === word && symbol !== text)
    ?.symbol;
}

/** `Nm`, `kgm`: a product written without its operator. */
function joinedUnits(text: string): string | undefined {
  for (let cut = 1; cut < text.length; cut += 1) {
    const [left, right] = [text.slice(0, cut), text.slice(cut)];
    if (lookUp(left) !== undefined && lookUp(right) !== undefined) return `${left}*${right}`;
  }
  return undefined;
}

function multiplied(a: Size, b: Size): Size {
  return {
    dimension: productOf(a.dimension, b.dimension),
    times: a.times * b.times,
    over: a.over * b.over,
    tens: a.tens + b.tens,
  };
}

function raised(a: Size, n: number): Size {
  if (n < 0) {
    const upright = raised(a, -n);
    return {
      dimension: quotientOf(plainNumber, upright.dimension),
      times: upright.over,
      over: upright.times,
      tens: -upright.tens,
    };
  }
  const tens = a.tens * n;
  const whole = Math.trunc(tens);
  return {
    dimension: powerOf(a.dimension, n),
    times: a.times ** n * 10 ** (tens - whole),
    over: a.over ** n,
    tens: whole,
  };
}

function skipSpace(reader: Reader): void {
  while (/\s/.test(reader.text[reader.at] ?? '')) reader.at += 1;
}
