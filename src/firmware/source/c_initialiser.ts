import type { ValueNode } from '../values/value_tree.js';
import { converted } from './c_arithmetic.js';
import { constantExpression, type Meaning } from './c_expression.js';
import { formatOf, type SourceType } from './c_type.js';
import type { TokenReader } from './token_reader.js';

/** Longer tables are no coefficients. */
const longest = 1 << 20;

/**
 * The value of an initialiser for a type (C11, 6.7.9): an expression, or a list in braces with or without designators.
 * @throws FirmwareError for what is not constant, and for lists whose inner braces are left out
 */
export function initialised(reader: TokenReader, type: SourceType, meaning: Meaning): ValueNode {
  return reader.nested(() => {
    switch (type.kind) {
      case 'array':
        return tableOf(reader, type, meaning);
      case 'record':
        return recordOf(reader, type, meaning);
      case 'other':
        throw reader.failure(`${type.name} is no number`);
      default: {
        const inBraces = reader.accept('{');
        const isEmpty = inBraces && reader.peek() === '}';
        const given = isEmpty ? { type, value: 0n } : constantExpression(reader, meaning);
        if (inBraces) reader.expect('}');
        return {
          kind: 'number',
          value: converted(given, type).value,
          format: formatOf(type),
          type: type.name,
        };
      }
    }
  });
}

function tableOf(reader: TokenReader, type: SourceType & { kind: 'array' }, meaning: Meaning): ValueNode {
  if (reader.peek() !== '{') throw reader.failure('a table needs braces around its elements');
  reader.expect('{');
  const elements: ValueNode[] = [];
  let next = 0;
  while (!reader.accept('}')) {
    if (reader.accept('[')) {
      next = Number(constantExpression(reader, meaning).value);
      reader.expect(']');
      reader.expect('=');
    }
    if (next < 0 || next >= Math.min(type.length ?? longest, longest))
      throw reader.failure(`element [${next}] lies outside of the table`);
    while (elements.length < next) elements.push(zero(type.element));
    elements[next++] = initialised(reader, type.element, meaning);
    if (!reader.accept(',') && reader.peek() !== '}')
      throw reader.failure('expected a comma between two elements');
  }
  while (elements.length < Math.min(type.length ?? 0, longest)) elements.push(zero(type.element));
  return { kind: 'array', elements };
}

function recordOf(reader: TokenReader, type: SourceType & { kind: 'record' }, meaning: Meaning): ValueNode {
  const { members } = type;
  if (!members) throw reader.failure(`${type.name} is not defined here`);
  reader.expect('{');
  const given = new Map<number, ValueNode>();
  let next = 0;
  while (!reader.accept('}')) {
    if (reader.accept('.')) {
      const { text } = reader.token();
      next = members.findIndex((member) => member.name === text);
      if (next < 0) throw reader.failure(`${type.name} has no direct member ${text}`);
      reader.position++;
      reader.expect('=');
    }
    const member = members[next];
    if (!member) throw reader.failure(`more values than ${type.name} has members`);
    given.set(next++, initialised(reader, member.type, meaning));
    if (!reader.accept(',') && reader.peek() !== '}')
      throw reader.failure('expected a comma between two members');
  }
  return { kind: 'record', members: named(type, given) };
}

/** Members without a value are zero; those of anonymous records are written as the outer one's. */
function named(
  type: SourceType & { kind: 'record' },
  given: ReadonlyMap<number, ValueNode>,
): Map<string, ValueNode> {
  const result = new Map<string, ValueNode>();
  for (const [i, member] of (type.members ?? []).entries()) {
    const isOther = type.isUnion && !given.has(i);
    const value =
      given.get(i) ??
      (isOther ? { kind: 'none' as const, why: 'another member of the union is set' } : zero(member.type));
    if (member.name !== undefined) result.set(member.name, value);
    else if (value.kind === 'record') for (const [name, inner] of value.members) result.set(name, inner);
  }
  return result;
}

/** What C stores where an initialiser says nothing. */
function zero(type: SourceType): ValueNode {
  switch (type.kind) {
    case 'array':
      return {
        kind: 'array',
        elements: Array.from({ length: Math.min(type.length ?? 0, longest) }, () => zero(type.element)),
      };
    case 'record':
      return { kind: 'record', members: named(type, new Map()) };
    case 'other':
      return { kind: 'none', why: `${type.name} is no number` };
    default:
      return {
        kind: 'number',
        value: type.kind === 'float' ? 0 : 0n,
        format: formatOf(type),
        type: type.name,
      };
  }
}
