import type { Operator } from './spec.js';
import type { Syntax } from './syntax.js';
import { type SyntaxFault, type Token, tokensOf } from './tokens.js';
import { parseUnit, siValue } from './units.js';

/** Binding strength of the operators of two operands; unary minus stands between `*` and `^`. */
const strength: Readonly<Record<Operator, number>> = {
  '<': 1,
  '<=': 1,
  '>': 1,
  '>=': 1,
  '==': 1,
  '!=': 1,
  '+': 2,
  '-': 2,
  '*': 3,
  '/': 3,
  '^': 5,
};
const comparison = 1;
const deepest = 100;

interface Cursor {
  text: string;
  tokens: Token[];
  next: number;
  depth: number;
}

class Fault extends Error {
  constructor(
    message: string,
    readonly at: number,
  ) {
    super(message);
  }
}

/**
 * Reads what stands in a slot for a value: a quantity by itself (`38 kg*m^2`, `-3 N*m`) or an expression, in which
 * quantities stand in parentheses of their own. Precedence climbing: comparisons, then + -, * /, unary minus, ^
 * (which groups to the right).
 */
export function parseExpression(text: string): Syntax | SyntaxFault {
  const tokens = tokensOf(text);
  if (!Array.isArray(tokens)) return tokens;
  const cursor: Cursor = { text, tokens, next: 0, depth: 0 };
  try {
    return whole(cursor);
  } catch (error) {
    if (error instanceof Fault) return { kind: 'fault', message: error.message, at: error.at };
    throw error;
  }
}

function whole(cursor: Cursor): Syntax {
  if (peek(cursor).kind === 'end') throw new Fault('an expression was expected here', 0);
  const bare = quantity(cursor, 'end');
  if (bare !== undefined) return bare;
  const syntax = operations(cursor, comparison);
  const left = peek(cursor);
  if (left.kind !== 'end') throw new Fault(leftOver(cursor, left), left.at);
  return syntax;
}

function operations(cursor: Cursor, weakest: number): Syntax {
  let left = operand(cursor);
  let compared = false;
  for (;;) {
    const token = peek(cursor);
    const operator = operatorOf(token);
    if (operator === undefined || strength[operator] < weakest) return left;
    if (strength[operator] === comparison && compared) {
      throw new Fault('a comparison of a comparison; compare twice and multiply, or use if(…)', token.at);
    }
    compared = strength[operator] === comparison;
    cursor.next += 1;
    // Only ^ groups to the right.
    const next = operator === '^' ? strength[operator] - 1 : strength[operator] + 1;
    const right = nested(cursor, () => operations(cursor, next));
    left = { kind: 'operation', operator, left, right, at: token.at };
  }
}

function operand(cursor: Cursor): Syntax {
  const token = peek(cursor);
  if (token.text === '-' || token.text === '+') return signed(cursor, token);
  if (token.text === '(') return nested(cursor, () => parenthesised(cursor));
  cursor.next += 1;
  if (token.kind === 'number') return { kind: 'number', value: numberOf(token), at: token.at };
  if (token.kind === 'name' && peek(cursor).text === '(') return nested(cursor, () => call(cursor, token));
  if (token.kind === 'name') return { kind: 'name', name: token.text, index: index(cursor), at: token.at };
  const found = token.kind === 'end' ? 'the expression ends' : `there is \`${token.text}\``;
  throw new Fault(`a number, a name or ( was expected where ${found}`, token.at);
}

function signed(cursor: Cursor, token: Token): Syntax {
  cursor.next += 1;
  return nested(cursor, () => {
    const of = operations(cursor, strength['*'] + 1);
    return token.text === '+' ? of : { kind: 'negate', of, at: token.at };
  });
}

function parenthesised(cursor: Cursor): Syntax {
  const opened = peek(cursor);
  cursor.next += 1;
  const inner = quantity(cursor, ')') ?? operations(cursor, comparison);
  expectClosed(cursor, opened);
  return inner;
}

function call(cursor: Cursor, name: Token): Syntax {
  const opened = peek(cursor);
  cursor.next += 1;
  const given: Syntax[] = [];
  if (peek(cursor).text !== ')') {
    do given.push(operations(cursor, comparison));
    while (take(cursor, ','));
  }
  expectClosed(cursor, opened);
  return { kind: 'call', name: name.text, arguments: given, at: name.at };
}

function index(cursor: Cursor): number | undefined {
  const opened = peek(cursor);
  if (!take(cursor, '[')) return undefined;
  const token = peek(cursor);
  const value = Number(token.text);
  if (token.kind !== 'number' || !/^\d+$/.test(token.text) || value > 1e6) {
    throw new Fault('an index is a whole number, counted from 0, as in name[3]', token.at);
  }
  cursor.next += 1;
  if (!take(cursor, ']')) throw new Fault('this [ is not closed by ]', opened.at);
  return value;
}

/** A number with a unit that fills everything up to `end`; nothing is taken where there is none. */
function quantity(cursor: Cursor, end: 'end' | ')'): Syntax | undefined {
  const sign = peek(cursor).text === '-' ? '-' : '';
  const first = cursor.next + (sign === '' ? 0 : 1);
  const [number, start] = [cursor.tokens[first], cursor.tokens[first + 1]];
  if (number?.kind !== 'number' || start === undefined || !startsUnit(cursor, first + 1)) return undefined;
  const last = end === 'end' ? cursor.tokens.length - 1 : closing(cursor, first + 1);
  const unitText = cursor.text.slice(start.at, cursor.tokens[last].at);
  const unit = parseUnit(unitText);
  if (unit.kind === 'fault') throw new Fault(unit.message, start.at + unit.at);
  const digits = `${sign}${number.text}`;
  numberOf(number);
  const value = siValue(digits, unit);
  if (!Number.isFinite(value))
    throw new Fault(`\`${digits} ${unit.unit.text}\` is too large a number`, number.at);
  const at = cursor.tokens[cursor.next].at;
  cursor.next = last;
  return { kind: 'quantity', digits, value, unit, at };
}

/** A unit starts with a symbol, or with the 1 of `1/s`. */
function startsUnit(cursor: Cursor, at: number): boolean {
  const token = cursor.tokens[at];
  return token.kind === 'name' || (token.text === '1' && cursor.tokens[at + 1].text === '/');
}

/** The token that closes the parenthesis in which token `from` stands, or the end of the text. */
function closing(cursor: Cursor, from: number): number {
  let open = 0;
  for (let at = from; at < cursor.tokens.length - 1; at += 1) {
    if (cursor.tokens[at].text === '(') open += 1;
    if (cursor.tokens[at].text !== ')') continue;
    if (open === 0) return at;
    open -= 1;
  }
  return cursor.tokens.length - 1;
}

function numberOf(token: Token): number {
  const value = Number(token.text);
  if (!Number.isFinite(value)) throw new Fault(`\`${token.text}\` is too large a number`, token.at);
  return value;
}

function leftOver(cursor: Cursor, token: Token): string {
  const before = cursor.tokens[cursor.next - 1];
  if (before?.kind === 'number' && token.kind === 'name') {
    return `a quantity inside an expression stands in parentheses of its own, as in (0.5 mrad/s); here \`${token.text}\` follows the number ${before.text}`;
  }
  if (token.text === ')') return 'a ) without its (';
  if (token.text === ',') return 'a comma belongs between the arguments of a function only';
  return `an operator was expected before \`${token.text}\``;
}

function expectClosed(cursor: Cursor, opened: Token): void {
  if (take(cursor, ')')) return;
  const found = peek(cursor);
  if (found.kind === 'end') throw new Fault('this ( is not closed by )', opened.at);
  throw new Fault(leftOver(cursor, found), found.at);
}

function nested(cursor: Cursor, read: () => Syntax): Syntax {
  cursor.depth += 1;
  if (cursor.depth > deepest) throw new Fault(`nested more than ${deepest} deep`, peek(cursor).at);
  const syntax = read();
  cursor.depth -= 1;
  return syntax;
}

function operatorOf(token: Token): Operator | undefined {
  return token.kind === 'symbol' && Object.hasOwn(strength, token.text)
    ? (token.text as Operator)
    : undefined;
}

function take(cursor: Cursor, text: string): boolean {
  if (peek(cursor).text !== text) return false;
  cursor.next += 1;
  return true;
}

function peek(cursor: Cursor): Token {
  return cursor.tokens[cursor.next];
}
