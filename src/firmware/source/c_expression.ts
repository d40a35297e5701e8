import { quoted } from '../failure.js';
import { binary, type CValue, converted, unary } from './c_arithmetic.js';
import { literalValue } from './c_literal.js';
import { type ArithmeticType, type DataModel, integer } from './c_type.js';
import type { TokenReader } from './token_reader.js';

/** What the names in an expression mean. */
export interface Meaning {
  model: DataModel;
  /** The value of an enumerator or of another constant, undefined when there is none. */
  constant(name: string): CValue | undefined;
  /** Reads a type name as in a cast, undefined (and nothing taken) where there is none. */
  typeName(reader: TokenReader): ArithmeticType | undefined;
}

/** Binary operators by how tightly they bind (C11, 6.5.5 to 6.5.14). */
const levels = [
  ['||'],
  ['&&'],
  ['|'],
  ['^'],
  ['&'],
  ['==', '!='],
  ['<', '>', '<=', '>='],
  ['<<', '>>'],
  ['+', '-'],
  ['*', '/', '%'],
];

/** Evaluates a constant expression. @throws FirmwareError for what is not constant, or not arithmetic */
export function constantExpression(reader: TokenReader, meaning: Meaning): CValue {
  return reader.nested(() => {
    const condition = atLevel(reader, meaning, 0);
    if (!reader.accept('?')) return condition;
    const yes = constantExpression(reader, meaning);
    reader.expect(':');
    const no = constantExpression(reader, meaning);
    const chosen = isTrue(condition) ? yes : no;
    // Both branches take part in the type of the result: adding a zero of the other converts to it.
    const type = binary('+', zeroOf(yes), zeroOf(no), meaning.model).type;
    return converted(chosen, type);
  });
}

function zeroOf(value: CValue): CValue {
  return { type: value.type, value: value.type.kind === 'float' ? 0 : 0n };
}

function isTrue(value: CValue): boolean {
  return value.value !== 0 && value.value !== 0n;
}

function atLevel(reader: TokenReader, meaning: Meaning, level: number): CValue {
  if (level === levels.length) return operand(reader, meaning);
  let left = atLevel(reader, meaning, level + 1);
  while (levels[level].includes(reader.peek())) {
    const operator = reader.token().text;
    reader.position++;
    const right = atLevel(reader, meaning, level + 1);
    left =
      operator === '&&' || operator === '||'
        ? logical(operator, left, right, meaning)
        : binary(operator, left, right, meaning.model);
  }
  return left;
}

function logical(operator: string, left: CValue, right: CValue, meaning: Meaning): CValue {
  const result = operator === '&&' ? isTrue(left) && isTrue(right) : isTrue(left) || isTrue(right);
  return { type: integer('int', meaning.model.int, true), value: result ? 1n : 0n };
}

function operand(reader: TokenReader, meaning: Meaning): CValue {
  return reader.nested(() => {
    const { kind, text } = reader.token();
    if (['-', '+', '~', '!'].includes(text)) {
      reader.position++;
      return unary(text, operand(reader, meaning), meaning.model);
    }
    if (text === '(') return parenthesised(reader, meaning);
    if (kind === 'number') {
      reader.position++;
      return literalValue(text, meaning.model);
    }
    if (kind === 'text' && text.startsWith("'")) return character(reader, meaning);
    return named(reader, meaning);
  });
}

/** A cast, or an expression in parentheses. */
function parenthesised(reader: TokenReader, meaning: Meaning): CValue {
  reader.expect('(');
  const type = meaning.typeName(reader);
  if (type) {
    reader.expect(')');
    return converted(operand(reader, meaning), type);
  }
  const value = constantExpression(reader, meaning);
  reader.expect(')');
  return value;
}

/** A constant's name, `static_cast<type>(value)`, or `type(value)` and `type{value}` of C++. */
function named(reader: TokenReader, meaning: Meaning): CValue {
  if (reader.accept('static_cast')) {
    reader.expect('<');
    const type = meaning.typeName(reader);
    if (!type) throw reader.failure('a cast to no arithmetic type');
    reader.expect('>');
    return converted(parenthesised(reader, meaning), type);
  }
  const type = meaning.typeName(reader);
  if (type) {
    const closing = reader.accept('{') ? '}' : ')';
    if (closing === ')') reader.expect('(');
    const value = constantExpression(reader, meaning);
    reader.expect(closing);
    return converted(value, type);
  }
  let name = reader.token().text;
  const start = reader.position;
  reader.position++;
  while (reader.accept('::')) {
    name += `::${reader.token().text}`;
    reader.position++;
  }
  const value = reader.peek() === '(' ? undefined : meaning.constant(name);
  if (value) return value;
  reader.position = start;
  throw reader.failure(`${quoted(name)} is no constant whose value is known here`);
}

const escapes: Record<string, number> = { n: 10, t: 9, r: 13, '0': 0, '\\': 92, "'": 39, '"': 34 };

function character(reader: TokenReader, meaning: Meaning): CValue {
  const inside = reader.token().text.slice(1, -1);
  const code =
    inside.length === 1
      ? inside.charCodeAt(0)
      : inside.length === 2 && inside[0] === '\\'
        ? escapes[inside[1]]
        : undefined;
  if (code === undefined) throw reader.failure(`the character ${quoted(inside)} is not supported`);
  reader.position++;
  return { type: integer('int', meaning.model.int, true), value: BigInt(code) };
}
