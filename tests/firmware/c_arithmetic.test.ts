import { writeFileSync } from 'node:fs';
import { join } from 'node:path';
import fc from 'fast-check';
import { describe, expect, test } from 'vitest';
import { FirmwareError } from '../../src/firmware/index.js';
import { binary, type CValue, converted, unary } from '../../src/firmware/source/c_arithmetic.js';
import { constantExpression, type Meaning } from '../../src/firmware/source/c_expression.js';
import { tokensOf } from '../../src/firmware/source/c_token.js';
import {
  type ArithmeticType,
  type DataModel,
  integer,
  typeOfWords,
  usualModel,
} from '../../src/firmware/source/c_type.js';
import { TokenReader } from '../../src/firmware/source/token_reader.js';
import { freshFolder, leaveOut, run } from './toolchain.js';

/** Constant expressions have the value and the type that C gives them: the witness is the C compiler of the machine. */
const hostModel: DataModel = { int: 32, long: 64, double: 64, signedCharacters: true };

function meaningFor(model: DataModel): Meaning {
  return {
    model,
    constant: () => undefined,
    typeName(reader) {
      const words: string[] = [];
      while (/^(unsigned|signed|char|short|int|long|float|double)$/.test(reader.peek(words.length)))
        words.push(reader.peek(words.length));
      if (words.length === 0) return undefined;
      reader.position += words.length;
      return typeOfWords(words, model);
    },
  };
}

function evaluated(text: string, model = usualModel): CValue {
  const reader = new TokenReader(tokensOf(text, 'x.c'));
  const value = constantExpression(reader, meaningFor(model));
  expect(reader.atEnd, text).toBe(true);
  return value;
}

/** Expressions over literals of every type, with every operator and cast that the reader knows. */
const literal = fc.oneof(
  fc.integer({ min: 0, max: 300 }).map(String),
  fc.nat(0xffffffff).map((value) => `0x${value.toString(16)}u`),
  fc.constantFrom(
    '0',
    '1',
    '7ll',
    '100000l',
    '2147483647',
    '4000000000',
    "'A'",
    '0.1f',
    '1.5',
    '3.25f',
    '1e3',
    '0.3',
    '1e-3f',
    '0x1p-3',
  ),
);
const castType = fc.constantFrom(
  'int',
  'unsigned',
  'short',
  'unsigned char',
  'signed char',
  'long long',
  'unsigned long',
  'float',
  'double',
);
const { expression } = fc.letrec<{ expression: string }>((tie) => ({
  expression: fc.oneof(
    { maxDepth: 5, depthIdentifier: 'expression' },
    literal,
    fc
      .tuple(fc.constantFrom('-', '+', '~', '!'), tie('expression'))
      .map(([operator, operand]) => `(${operator}${operand})`),
    fc
      .tuple(
        tie('expression'),
        fc.constantFrom(
          '+',
          '-',
          '*',
          '/',
          '%',
          '<<',
          '>>',
          '&',
          '|',
          '^',
          '<',
          '>',
          '<=',
          '>=',
          '==',
          '!=',
          '&&',
          '||',
        ),
        tie('expression'),
      )
      .map(([left, operator, right]) => `(${left} ${operator} ${right})`),
    fc.tuple(castType, tie('expression')).map(([type, operand]) => `((${type})${operand})`),
    fc
      .tuple(tie('expression'), tie('expression'), tie('expression'))
      .map(([a, b, c]) => `(${a} ? ${b} : ${c})`),
  ),
}));

describe.skipIf(leaveOut('cc'))('against the compiler', () => {
  test('600 expressions have the same value and the same type', async () => {
    const folder = freshFolder();
    const own = new Map<string, CValue>();
    for (const text of fc.sample(expression, { numRuns: 2000, seed: 20250 })) {
      try {
        own.set(text, evaluated(text, hostModel));
      } catch (error) {
        // Undefined in C, or no arithmetic at all: then there is nothing to compare.
        if (!(error instanceof FirmwareError)) throw error;
      }
      if (own.size === 600) break;
    }
    expect(own.size).toBe(600);
    const kind =
      '_Generic((X), int: "int", unsigned: "unsigned int", long: "long", unsigned long: "unsigned long", long long: "long long", unsigned long long: "unsigned long long", float: "float", double: "double", default: "smaller")';
    const lines = [...own.keys()].map((text) => `SHOW(${text})`);
    const program = `#include <stdio.h>
      #define SHOW(e) do { static const __typeof__(e) value = (e); printf("%s %.17g %lld\\n", TYPE(e), (double)value, (long long)((value) < 9e18 && (value) > -9e18 ? value : 0)); } while (0);
      #define TYPE(e) ${kind.replaceAll('(X)', '(e)')}
      int main(void) { ${lines.join('\n')} return 0; }`;
    writeFileSync(join(folder, 'show.c'), program);
    await run('cc', [
      '-w',
      '-fwrapv',
      '-ffp-contract=off',
      '-o',
      join(folder, 'show'),
      join(folder, 'show.c'),
    ]);
    const printed = (await run(join(folder, 'show'), [])).trim().split('\n');
    for (const [i, [text, { type, value }]] of [...own].entries()) {
      const [, shownType, shown] = /^(.*) (\S+) \S+$/.exec(printed[i])!;
      expect(Number(value), text).toBe(
        Number(shown.replace('inf', 'Infinity').replace('-nan', 'NaN').replace('nan', 'NaN')),
      );
      // On this machine `long` and `long long` are equally wide: the reader calls both by one name.
      const plain = (name: string) => name.replace('long long', 'long').replace(/^unsigned$/, 'unsigned int');
      if (shownType !== 'smaller' && type.bits >= 32) expect(plain(type.name), text).toBe(plain(shownType));
    }
  });
});

describe('rules which a compiler cannot show', () => {
  test.each([
    ['1 + 2 * 3', 7n],
    ['(1 + 2) * 3', 9n],
    ['10 - 4 - 3', 3n],
    ['1 << 2 + 1', 8n],
    ['5 & 6 == 6', 1n],
    ['1 | 2 ^ 3 & 1', 3n],
    ['1 ? 2 : 0 ? 3 : 4', 2n],
    ['0 ? 2 : 0 ? 3 : 4', 4n],
    ['-7 / 2', -3n],
    ['-7 % 2', -1n],
    ['!0 + !5', 1n],
    ['- - 3', 3n],
    ['2 > 1 > 0', 1n],
  ])('%s is %s', (text, value) => {
    expect(evaluated(text).value).toBe(value);
  });

  test('unsigned wraps, signed is refused', () => {
    expect(evaluated('0u - 1u').value).toBe(4294967295n);
    expect(evaluated('0xffffffffu * 0xffffffffu').value).toBe(1n);
    expect(() => evaluated('2147483647 * 2')).toThrow(/4294967294 overflows int, which C leaves undefined/);
    expect(() => evaluated('-2147483648 - 2147483647 - 2')).not.toThrow();
  });

  test('float stays float, and is rounded after every operation', () => {
    expect(evaluated('0.1f + 0.2f').value).toBe(Math.fround(Math.fround(0.1) + Math.fround(0.2)));
    expect(evaluated('16777216.0f + 1.0f + 1.0f').value).toBe(16777216);
    expect(evaluated('16777216.0f + 2.0').value).toBe(16777218);
    expect(evaluated('1 / 3.0f').value).toBe(Math.fround(1 / 3));
  });

  test('on a 16-bit target integers are narrower', () => {
    const narrow: DataModel = { int: 16, long: 32, double: 32, signedCharacters: true };
    expect(evaluated('40000', narrow).type.name).toBe('long');
    expect(() => evaluated('32767 + 1', narrow)).toThrow(/overflows int/);
    expect(evaluated('65535u + 1u', narrow).value).toBe(0n);
    expect(evaluated('0.1', narrow).value).toBe(Math.fround(0.1));
  });

  test.each([
    '1 +',
    '(1',
    '1)',
    '1 2',
    '* 3',
    '(int)',
    '1 ? 2',
    'name',
    'f(3)',
    '"text"',
    "'ab'",
    '++1',
    '1 = 2',
  ])('%s is no constant expression', (text) => {
    expect(() => {
      const reader = new TokenReader(tokensOf(text, 'x.c'));
      constantExpression(reader, meaningFor(usualModel));
      if (!reader.atEnd) throw reader.failure('more than one expression');
    }).toThrow(FirmwareError);
  });
});

describe('conversions', () => {
  const types: ArithmeticType[] = [8, 16, 32, 64].flatMap((bits) =>
    [true, false].map((signed) => integer('i', bits as 8 | 16 | 32 | 64, signed)),
  );
  const anyType = fc.constantFrom(...types);
  const anyInteger = fc.bigInt({ min: -(2n ** 63n), max: 2n ** 63n - 1n });

  test('an integer that fits is kept, any other one wraps by a multiple of 2^width', () => {
    fc.assert(
      fc.property(anyType, anyInteger, (type, value) => {
        const result = converted({ type, value }, type).value as bigint;
        expect((result - value) % (1n << BigInt(type.bits))).toBe(0n);
        expect(converted({ type, value: result }, type).value).toBe(result);
      }),
    );
  });

  test('a truth value is 0 or 1', () => {
    const bool: ArithmeticType = { kind: 'integer', name: '_Bool', bits: 8, signed: false };
    expect([0n, 256n, -1n].map((value) => converted({ type: types[6], value }, bool).value)).toEqual([
      0n,
      1n,
      1n,
    ]);
    expect(converted({ type: { kind: 'float', name: 'float', bits: 32 }, value: 0.25 }, bool).value).toBe(1n);
  });

  test('what does not fit an integer is refused', () => {
    const double: ArithmeticType = { kind: 'float', name: 'double', bits: 64 };
    expect(converted({ type: double, value: -3.9 }, integer('int', 32, true)).value).toBe(-3n);
    expect(() => converted({ type: double, value: 3e9 }, integer('int', 32, true))).toThrow(
      /3000000000 does not fit int/,
    );
    expect(() => converted({ type: double, value: Number.NaN }, integer('int', 32, true))).toThrow(
      /NaN cannot be converted/,
    );
  });

  test('addition commutes, and negation undoes itself', () => {
    const double: ArithmeticType = { kind: 'float', name: 'double', bits: 64 };
    const value = (number: number): CValue => ({ type: double, value: number });
    fc.assert(
      fc.property(fc.double({ noNaN: true }), fc.double({ noNaN: true }), (a, b) => {
        expect(binary('+', value(a), value(b), usualModel)).toEqual(
          binary('+', value(b), value(a), usualModel),
        );
        expect(unary('-', unary('-', value(a), usualModel), usualModel).value).toBe(a);
      }),
    );
  });
});
