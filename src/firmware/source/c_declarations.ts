import { FirmwareError, quoted } from '../failure.js';
import type { NamedValue, ValueNode } from '../values/value_tree.js';
import { type CValue, converted } from './c_arithmetic.js';
import { constantExpression, type Meaning } from './c_expression.js';
import { initialised } from './c_initialiser.js';
import type { Token } from './c_token.js';
import {
  type ArithmeticType,
  type DataModel,
  formatOf,
  integer,
  isTypeWord,
  type SourceType,
  typeNamed,
  typeOfWords,
} from './c_type.js';
import { TokenReader } from './token_reader.js';

const storageWords = [
  'static',
  'extern',
  'const',
  'volatile',
  'constexpr',
  'constinit',
  'inline',
  'register',
  'restrict',
  '__extension__',
  'typename',
  '_Atomic',
  'mutable',
  'thread_local',
];
const attributes = [
  '__attribute__',
  '__attribute',
  '__declspec',
  'alignas',
  '_Alignas',
  '__aligned',
  '__asm__',
  'asm',
  'section',
];

/**
 * The initialised data of a translation unit: what its declarations outside of functions say. What cannot be understood is
 * passed over, and is an error only for whoever asks for it.
 */
export class Declarations implements Meaning {
  /** Variables and enumerators by their full name. */
  readonly values = new Map<string, NamedValue>();
  private readonly constants = new Map<string, CValue>();
  private readonly types = new Map<string, SourceType>();
  private scopes: string[] = [];

  constructor(
    tokens: readonly Token[],
    readonly model: DataModel,
  ) {
    const reader = new TokenReader(tokens);
    while (!reader.atEnd) this.declarationOrSkip(reader);
  }

  constant(name: string): CValue | undefined {
    return this.lookUp(this.constants, name);
  }

  typeName(reader: TokenReader): ArithmeticType | undefined {
    const start = reader.position;
    const type = this.specifiers(reader);
    if (type && (type.kind === 'float' || type.kind === 'integer')) return type;
    reader.position = start;
    return undefined;
  }

  private lookUp<T>(map: ReadonlyMap<string, T>, name: string): T | undefined {
    for (let depth = this.scopes.length; depth >= 0; depth--) {
      const found = map.get([...this.scopes.slice(0, depth), name].join('::'));
      if (found !== undefined) return found;
    }
    return undefined;
  }

  private fullName(name: string): string {
    return [...this.scopes, name].join('::');
  }

  private declarationOrSkip(reader: TokenReader): void {
    const start = reader.position;
    const { scopes } = this;
    try {
      this.declaration(reader);
    } catch (error) {
      if (!(error instanceof FirmwareError)) throw error;
      this.scopes = scopes;
      reader.position = start;
      passDeclaration(reader);
    }
  }

  private declaration(reader: TokenReader): void {
    if (reader.accept(';') || reader.accept('}')) return;
    if (reader.peek() === 'namespace' || (reader.peek() === 'inline' && reader.peek(1) === 'namespace')) {
      this.namespace(reader);
      return;
    }
    if (reader.peek() === 'extern' && reader.peek(1).startsWith('"')) {
      reader.position += 2;
      // The declarations of an extern "C" block are like all others; its closing brace is passed over.
      reader.accept('{');
      return;
    }
    const isTypedef = reader.accept('typedef');
    const isExtern = reader.peek() === 'extern';
    const type = this.specifiers(reader);
    if (!type) throw reader.failure('not a declaration of data');
    if (reader.accept(';')) return;
    do this.declarator(reader, type, isTypedef, isExtern);
    while (reader.accept(','));
    reader.expect(';');
  }

  private namespace(reader: TokenReader): void {
    reader.accept('inline');
    reader.expect('namespace');
    const names: string[] = [];
    while (reader.peek() !== '{') {
      if (reader.token().kind === 'word') names.push(reader.token().text);
      else if (reader.peek() !== '::') throw reader.failure('not a namespace');
      reader.position++;
    }
    reader.expect('{');
    const outer = this.scopes;
    this.scopes = [...outer, ...names];
    while (!reader.atEnd && reader.peek() !== '}') this.declarationOrSkip(reader);
    reader.accept('}');
    this.scopes = outer;
  }

  /** Specifiers of a declaration: storage words in any order around one type. */
  private specifiers(reader: TokenReader): SourceType | undefined {
    const words: string[] = [];
    let type: SourceType | undefined;
    for (;;) {
      const text = reader.peek();
      if (storageWords.includes(text)) reader.position++;
      else if (attributes.includes(text) || (text === '[' && reader.peek(1) === '['))
        this.passAttribute(reader);
      else if (isTypeWord(text)) {
        words.push(text);
        reader.position++;
      } else if (!type && words.length === 0 && reader.position < reader.end) {
        type = this.namedOrDefined(reader);
        if (!type) return undefined;
      } else break;
    }
    return type ?? (words.length > 0 ? typeOfWords(words, this.model) : undefined);
  }

  private passAttribute(reader: TokenReader): void {
    if (reader.peek() !== '[') reader.position++;
    if (reader.peek() === '(' || reader.peek() === '[') reader.passBrackets();
  }

  private namedOrDefined(reader: TokenReader): SourceType | undefined {
    const text = reader.peek();
    if (text === 'enum') return this.enumeration(reader);
    if (text === 'struct' || text === 'union' || text === 'class') return this.record(reader);
    if (reader.token().kind !== 'word') return undefined;
    let name = text;
    let length = 1;
    while (reader.peek(length) === '::') {
      name += `::${reader.peek(length + 1)}`;
      length += 2;
    }
    const type = this.lookUp(this.types, name) ?? typeNamed(name.replace(/^std::/, ''));
    if (type) reader.position += length;
    return type;
  }

  private enumeration(reader: TokenReader): SourceType {
    reader.expect('enum');
    const isScoped = reader.accept('class') || reader.accept('struct');
    const name = reader.token().kind === 'word' ? reader.token().text : '';
    if (name !== '') reader.position++;
    const under = reader.accept(':') ? this.typeName(reader) : undefined;
    const type = { ...(under ?? integer('int', this.model.int, true)), name: `enum ${name}`.trim() };
    if (!reader.accept('{')) return this.lookUp(this.types, `enum ${name}`) ?? type;
    let next = 0n;
    const outer = this.scopes;
    if (isScoped) this.scopes = [...outer, name];
    while (!reader.accept('}')) {
      const token = reader.token();
      reader.position++;
      if (reader.accept('=')) next = BigInt(constantExpression(reader, this).value);
      this.define(token, token.text, type, { type, value: next });
      next++;
      if (!reader.accept(',') && reader.peek() !== '}') throw reader.failure('not an enumerator');
    }
    this.scopes = outer;
    this.defineType(`enum ${name}`, name, type);
    return type;
  }

  private defineType(tagged: string, name: string, type: SourceType): void {
    if (name === '') return;
    this.types.set(this.fullName(tagged), type);
    // C++ needs no `struct` before the name; in C this can hide nothing but a typedef of the same name.
    if (!this.types.has(this.fullName(name))) this.types.set(this.fullName(name), type);
  }

  private record(reader: TokenReader): SourceType {
    const word = reader.token().text;
    reader.position++;
    while (attributes.includes(reader.peek()) || reader.peek() === '[') this.passAttribute(reader);
    const name = reader.token().kind === 'word' ? reader.token().text : '';
    if (name !== '') reader.position++;
    const tagged = `${word} ${name}`.trim();
    if (reader.peek() !== '{') {
      if (reader.peek() === ':') throw reader.failure('a class with bases is not supported');
      return (
        this.lookUp(this.types, tagged) ?? {
          kind: 'record',
          name: tagged,
          isUnion: word === 'union',
          members: undefined,
        }
      );
    }
    const type: SourceType = {
      kind: 'record',
      name: tagged,
      isUnion: word === 'union',
      members: this.members(reader, name),
    };
    this.defineType(tagged, name, type);
    return type;
  }

  private members(reader: TokenReader, record: string): { name: string | undefined; type: SourceType }[] {
    const members: { name: string | undefined; type: SourceType }[] = [];
    const outer = this.scopes;
    if (record !== '') this.scopes = [...outer, record];
    reader.expect('{');
    while (!reader.accept('}')) {
      if (/^(public|private|protected)$/.test(reader.peek()) && reader.peek(1) === ':') {
        reader.position += 2;
        continue;
      }
      const isStatic = reader.peek() === 'static';
      const type = this.specifiers(reader);
      if (!type) throw reader.failure('not a member of plain data');
      if (reader.accept(';')) members.push({ name: undefined, type });
      else {
        do {
          if (isStatic) this.declarator(reader, type, false, false);
          else members.push(this.memberDeclarator(reader, type));
        } while (reader.accept(','));
        reader.expect(';');
      }
    }
    this.scopes = outer;
    return members;
  }

  private memberDeclarator(
    reader: TokenReader,
    type: SourceType,
  ): { name: string | undefined; type: SourceType } {
    const { name, type: whole } = this.nameAndShape(reader, type);
    if (reader.accept(':')) constantExpression(reader, this);
    if (reader.peek() === '=' || reader.peek() === '{')
      throw reader.failure('default values of members are not supported');
    return { name, type: whole };
  }

  private nameAndShape(
    reader: TokenReader,
    type: SourceType,
  ): { name: string; type: SourceType; token: Token } {
    let whole = type;
    while (reader.peek() === '*' || reader.peek() === '&' || storageWords.includes(reader.peek())) {
      if (!storageWords.includes(reader.peek())) whole = { kind: 'other', name: 'a pointer or a reference' };
      reader.position++;
    }
    const token = reader.token();
    if (token.kind !== 'word') throw reader.failure(`expected a name, found ${quoted(token.text)}`);
    reader.position++;
    let name = token.text;
    while (reader.accept('::')) {
      name += `::${reader.token().text}`;
      reader.position++;
    }
    const lengths: (number | undefined)[] = [];
    while (reader.peek() === '[' && reader.peek(1) !== '[') {
      reader.expect('[');
      lengths.push(reader.peek() === ']' ? undefined : Number(constantExpression(reader, this).value));
      reader.expect(']');
    }
    while (attributes.includes(reader.peek()) || (reader.peek() === '[' && reader.peek(1) === '['))
      this.passAttribute(reader);
    for (const length of lengths.reverse()) whole = { kind: 'array', element: whole, length };
    return { name, type: whole, token };
  }

  private declarator(reader: TokenReader, type: SourceType, isTypedef: boolean, isExtern: boolean): void {
    const { name, type: whole, token } = this.nameAndShape(reader, type);
    if (isTypedef) {
      const isPlain = whole.kind === 'float' || whole.kind === 'integer' || whole.kind === 'record';
      this.types.set(this.fullName(name), isPlain ? { ...whole, name } : whole);
      return;
    }
    if (reader.peek() === '(') throw reader.failure('a function');
    const hasValue = reader.accept('=') || reader.peek() === '{';
    if (!hasValue) {
      if (!isExtern && !this.values.has(this.fullName(name))) this.undefinedValue(name, token);
      return;
    }
    const node = this.valueOrWhy(reader, whole);
    this.values.set(this.fullName(name), { node, declaredAt: { file: token.file, line: token.line } });
    if (node.kind === 'number' && (whole.kind === 'float' || whole.kind === 'integer')) {
      this.constants.set(this.fullName(name), converted({ type: whole, value: node.value }, whole));
    }
  }

  /** A value that cannot be reckoned is an error only for whoever asks for it. */
  private valueOrWhy(reader: TokenReader, type: SourceType): ValueNode {
    const start = reader.position;
    try {
      return initialised(reader, type, this);
    } catch (error) {
      if (!(error instanceof FirmwareError)) throw error;
      reader.position = start;
      passInitialiser(reader);
      return { kind: 'none', why: error.message };
    }
  }

  private undefinedValue(name: string, token: Token): void {
    const why = 'it is not initialised here, the program sets it';
    this.values.set(this.fullName(name), {
      node: { kind: 'none', why },
      declaredAt: { file: token.file, line: token.line },
    });
  }

  private define(token: Token, name: string, type: ArithmeticType, value: CValue): void {
    this.constants.set(this.fullName(name), value);
    const node: ValueNode = { kind: 'number', value: value.value, format: formatOf(type), type: type.name };
    this.values.set(this.fullName(name), { node, declaredAt: { file: token.file, line: token.line } });
  }
}

/** Moves behind a declaration that is not understood: to its `;`, or behind the body of a function or class. */
function passDeclaration(reader: TokenReader): void {
  while (!reader.atEnd) {
    const text = reader.peek();
    if (text === '{' || text === '(' || text === '[') {
      try {
        reader.passBrackets();
      } catch {
        reader.position = reader.end;
        return;
      }
      if (text === '{' && reader.peek() !== ';' && reader.peek() !== ',' && reader.peek() !== '=') return;
      continue;
    }
    reader.position++;
    if (text === ';' || text === '}') return;
  }
}

/** Moves to the `,` or `;` behind an initialiser. */
function passInitialiser(reader: TokenReader): void {
  while (!reader.atEnd && reader.peek() !== ',' && reader.peek() !== ';') {
    if (['{', '(', '['].includes(reader.peek())) reader.passBrackets();
    else reader.position++;
  }
}
