import { writeFileSync } from 'node:fs';
import { join } from 'node:path';
import fc from 'fast-check';
import { beforeAll, describe, expect, test } from 'vitest';
import { type FirmwareImage, matchPaths, openSource, readCoefficient } from '../../src/firmware/index.js';
import { literalValue } from '../../src/firmware/source/c_literal.js';
import { usualModel } from '../../src/firmware/source/c_type.js';
import { fixtures, freshFolder, leaveOut, run } from './toolchain.js';

/** Constants of a source mean what a compiler makes of them: the witness is the compiler itself, asked by a program it builds. */
const request = { path: 'tuning.h', cwd: fixtures };

function errorOf(image: FirmwareImage, at: string, format?: string): string {
  try {
    readCoefficient(image, { name: 'gain', at, format });
  } catch (error) {
    return (error as Error).message;
  }
  throw new Error(`${at} was expected to fail`);
}

describe.skipIf(leaveOut('cc'))('a header through the preprocessor', () => {
  let image: FirmwareImage;

  beforeAll(async () => {
    image = await openSource(request);
  });

  const asked: [path: string, type: string, format: string][] = [
    ['KP', 'float', '%.9g'],
    ['KI', 'float', '%.9g'],
    ['PERIOD', 'float', '%.9g'],
    ['KD', 'double', '%.17g'],
    ['NOTCH_B1', 'int', '%d'],
    ['MASK', 'unsigned', '%u'],
    ['SHIFTED', 'int', '%d'],
    ['CHOSEN', 'int', '%d'],
    ['LIMIT', 'int', '%d'],
    ['MODE_STOW', 'int', '%d'],
    ['MODE_IDLE', 'int', '%d'],
    ['MODE_LAST', 'int', '%d'],
    ['taps[1]', 'float', '%.9g'],
    ['taps[5]', 'float', '%.9g'],
    ['notch[0][1]', 'int', '%d'],
    ['notch[1][0]', 'int', '%d'],
    ['notch[1][2]', 'int', '%d'],
    ['azimuth.kp', 'float', '%.9g'],
    ['azimuth.ki', 'float', '%.9g'],
    ['azimuth.range.low', 'int', '%d'],
    ['azimuth.spare[0]', 'int', '%d'],
    ['pair[0].range.high', 'int', '%d'],
    ['pair[1].ki', 'float', '%.9g'],
    ['ratio', 'double', '%.17g'],
    ['twice', 'double', '%.17g'],
    ['wide', 'unsigned', '%u'],
    ['sixteenth', 'float', '%.9g'],
  ];

  test('each constant is what the compiler makes of it', async () => {
    const folder = freshFolder();
    const lines = asked.map(([path, type, format]) => `printf("${path}=${format}\\n", (${type})(${path}));`);
    const program = `#include <stdio.h>\n#include "tuning.h"\nint main(void) {\n${lines.join('\n')}\nreturn 0; }\n`;
    writeFileSync(join(folder, 'print.c'), program);
    await run('cc', ['-w', `-I${fixtures}`, '-o', join(folder, 'print'), join(folder, 'print.c'), '-lm']);
    const printed = new Map(
      (await run(join(folder, 'print'), []))
        .trim()
        .split('\n')
        .map((line) => line.split('=') as [string, string]),
    );
    for (const [path, type] of asked) {
      const [element] = readCoefficient(image, { name: 'gain', at: path }).elements;
      const expected = Number(printed.get(path));
      expect(element.value, path).toBe(type === 'float' ? Math.fround(expected) : expected);
      expect(element.address).toBeUndefined();
    }
  });

  test('types, shapes, stored bits and places are given', () => {
    expect(readCoefficient(image, { name: 'g', at: 'notch' })).toMatchObject({
      type: 'int16_t[2][3]',
      shape: [2, 3],
      declaredAt: { file: 'tuning.h', line: 36 },
    });
    expect(readCoefficient(image, { name: 'g', at: 'KP' })).toMatchObject({
      type: 'float',
      shape: [],
      elements: [{ stored: '0x3fa00000' }],
    });
    expect(readCoefficient(image, { name: 'g', at: 'KP' }).declaredAt).toEqual({ file: 'tuning.h', line: 7 });
    expect(readCoefficient(image, { name: 'g', at: 'MODE_STOW' }).type).toBe('enum mode');
  });

  test('a format says how the stored integer is meant, or how a number would be stored', () => {
    expect(readCoefficient(image, { name: 'g', at: 'notch[0]', format: 'Q2.14' })).toMatchObject({
      type: 'int16_t[3] as Q2.14',
      elements: [
        { value: 1, stored: '0x4000', quantum: 2 ** -14 },
        { value: -29491 / 16384 },
        { value: 14746 / 16384 },
      ],
    });
    expect(readCoefficient(image, { name: 'g', at: 'KD', format: 'float32' }).elements[0].value).toBe(
      Math.fround(0.1),
    );
    expect(errorOf(image, 'SHIFTED', 'int8')).toMatch(/is 16384, which does not fit the 8 bits of int8/);
    expect(errorOf(image, 'KD', 'Q1.15')).toMatch(/is 0\.1: Q1\.15 stores integers only/);
  });

  test('defines reach the preprocessor', async () => {
    const fast = await openSource({ ...request, defines: ['FAST', 'EXTRA=3'] });
    expect(readCoefficient(fast, { name: 'g', at: 'LIMIT' }).elements[0].value).toBe(2);
    expect(readCoefficient(image, { name: 'g', at: 'LIMIT' }).elements[0].value).toBe(1);
  });

  test.each([
    ['NAME', /“NAME” has no value: .*is no constant whose value is known here/],
    ['UNKNOWN_CALL', /“sqrt” is no constant/],
    ['computed', /tuning\.h:45: “sizeof” is no constant/],
    ['unset', /it is not initialised here, the program sets it/],
    ['elsewhere', /has no “elsewhere”/],
    ['EMPTY', /has no “EMPTY”/],
    ['KQ', /has no “KQ”; nearest: “KD”, “KI”, “KP”/],
    ['azimuth.kq', /has no member “kq”; nearest: ki, kp/],
    ['azimuth', /is no number: name one of its members, as in azimuth\.kp/],
    ['taps[6]', /has 6 elements: \[6\] must be at most \[5\]/],
    ['KP[0]', /is no array: leave out \[0\]/],
    ['KP.x', /has no members/],
  ])('%s is an error for whoever asks for it', (path, message) => {
    expect(errorOf(image, path)).toMatch(message);
  });

  test('wildcards list what has a value; the headers of the system are left out', () => {
    expect(matchPaths(image, 'azimuth.**')).toEqual([
      'azimuth.kp',
      'azimuth.ki',
      'azimuth.range.low',
      'azimuth.range.high',
      'azimuth.spare',
    ]);
    expect(matchPaths(image, 'K*')).toEqual(['KP', 'KI', 'KD']);
    expect(matchPaths(image, 'notch[*][0]')).toEqual(['notch[0][0]', 'notch[1][0]']);
    expect(matchPaths(image, '**').filter((path) => /INT|__/.test(path))).toEqual([]);
  });

  test('a file that is not there, or does not preprocess, is an error with the compiler’s words', async () => {
    await expect(openSource({ ...request, path: 'none.h' })).rejects.toThrow(
      /ended with status 1: .*none\.h: No such file/,
    );
    await expect(openSource({ ...request, compiler: ['no-such-compiler'] })).rejects.toThrow(
      /could not be run \(ENOENT\)/,
    );
  });
});

describe.skipIf(leaveOut('cc'))('sources of other shapes', () => {
  const folder = freshFolder();
  const open = (name: string, text: string) => {
    writeFileSync(join(folder, name), text);
    return openSource({ path: name, cwd: folder });
  };
  const read = (image: FirmwareImage, at: string) =>
    readCoefficient(image, { name: 'g', at }).elements.map((element) => element.value);

  test('C++: namespaces, constexpr, static members, enum class, casts and braces', async () => {
    const image = await open(
      'gains.hpp',
      `#include <cstdint>
       namespace drive { inline namespace v2 { constexpr float kp{1.5f}; }
         struct Limits { static constexpr std::int16_t low = -20; static constexpr double wide{2.5}; };
         enum class Mode : uint8_t { idle = 3, track };
         constexpr auto skipped = 3;
         static constexpr int doubled = static_cast<int>(kp * 4) + int(1.9f) + Limits::low;
       }
       template <typename T> struct Ignored { T value; };
       class Hidden { public: Hidden(int); private: int x; };
       const float after = drive::kp * 2;
       constexpr float table[2][2] = {{1, 2}, {3, 4}};`,
    );
    expect(read(image, 'drive::v2::kp')).toEqual([1.5]);
    expect(read(image, 'drive::Limits::low')).toEqual([-20]);
    expect(read(image, 'drive::Limits::wide')).toEqual([2.5]);
    expect(read(image, 'drive::Mode::track')).toEqual([4]);
    expect(read(image, 'table')).toEqual([1, 2, 3, 4]);
  });

  test('what is not understood does not hinder what follows', async () => {
    const image = await open(
      'mixed.c',
      `typedef int (*callback)(int, float);
       static int helper(int a) { if (a > 3) { return a; } return -a; }
       struct forward;
       extern struct forward *list;
       const char *name = "kp = 3";
       static callback table[] = {helper};
       _Static_assert(sizeof(int) == 4, "int");
       union mixed { float real; unsigned raw; };
       const union mixed either = {.raw = 5};
       struct outer { int a; struct { float x; float y; }; int spare[3]; } const whole = {1, {2.5f}, {4, 5}};
       unsigned long long big = 18446744073709551615ull;
       const short last = 0x7fff;
       float b = 1.0f, c = -2.0f, d[2] = {1};`,
    );
    expect(read(image, 'last')).toEqual([32767]);
    expect(read(image, 'whole.x')).toEqual([2.5]);
    expect(read(image, 'whole.y')).toEqual([0]);
    expect(read(image, 'whole.spare')).toEqual([4, 5, 0]);
    expect(read(image, 'either.raw')).toEqual([5]);
    expect(read(image, 'c')).toEqual([-2]);
    expect(read(image, 'd')).toEqual([1, 0]);
    expect(errorOf(image, 'either.real')).toMatch(/another member of the union is set/);
    expect(errorOf(image, 'big')).toMatch(/beyond 2\^53/);
    expect(errorOf(image, 'name')).toMatch(/a pointer or a reference is no number/);
    expect(errorOf(image, 'table')).toMatch(/has no “table”/);
  });

  test.each([
    ['1 / 0', /division by zero/],
    ['2147483647 + 1', /overflows int, which C leaves undefined/],
    ['1 << 31', /overflows int/],
    ['1 << 32', /is not defined for int/],
    ['1.5 % 2', /no constant arithmetic/],
    ['~1.5', /no constant arithmetic/],
    ['(unsigned char)300.0', /300 does not fit unsigned char/],
    ['09', /is no number that C knows/],
    ['1.0L', /is no number that C knows/],
    ['1e99999', /an exponent of 99999 is beyond every float/],
    ['sizeof(int)', /“sizeof” is no constant/],
    ['(((1', /expected|ends too early/],
    [`${'('.repeat(300)}1${')'.repeat(300)}`, /nesting deeper than 200/],
  ])('#define X %s is an error, not a guess', async (expression, message) => {
    expect(errorOf(await open('x.h', `#define X ${expression}\n`), 'X')).toMatch(message);
  });

  test('other widths of types change what an expression means', async () => {
    writeFileSync(
      join(folder, 'narrow.h'),
      '#define X (40000 + 30000)\n#define Y 40000\nconst double z = 0.1;\n',
    );
    const narrow = await openSource({ path: 'narrow.h', cwd: folder, dataModel: { int: 16, double: 32 } });
    expect(readCoefficient(narrow, { name: 'g', at: 'X' })).toMatchObject({
      type: 'long',
      elements: [{ value: 70000 }],
    });
    expect(readCoefficient(narrow, { name: 'g', at: 'z' }).elements[0].value).toBe(Math.fround(0.1));
  });
});

describe('literals', () => {
  test('a float64 is the platform’s', () => {
    fc.assert(
      fc.property(fc.double({ noNaN: true, noDefaultInfinity: true, min: 0 }), (value) => {
        const text = value.toExponential();
        expect(literalValue(text, usualModel).value).toBe(value);
      }),
    );
  });

  test('a float32 is rounded once: the nearest of its two neighbours, in exact fractions', () => {
    fc.assert(
      fc.property(
        fc.nat(10 ** 9),
        fc.integer({ min: -30, max: 25 }),
        fc.nat(10 ** 9),
        (high, exponent, low) => {
          const text = `${high}.${low}e${exponent}f`;
          const got = literalValue(text, usualModel).value as number;
          const distance = (candidate: number) => distanceTo(`${high}.${low}e${exponent}`, candidate);
          for (const step of [-1, 1]) {
            const neighbour = neighbourOf(got, step);
            if (Number.isFinite(neighbour)) expect(distance(got) <= distance(neighbour), text).toBe(true);
          }
        },
      ),
    );
  });

  // Found by search: by way of float64 this decimal is rounded to the wrong float32 (1 + 2^-24, and a hair more).
  test('a decimal just above the middle of two floats goes up', () => {
    expect(literalValue('1.00000005960464477539062500000000000000000001f', usualModel).value).toBe(
      1 + 2 ** -23,
    );
    expect(literalValue('1.000000059604644775390625f', usualModel).value).toBe(1);
    expect(literalValue('1.00000005960464477539062499999999999999999999f', usualModel).value).toBe(1);
  });

  test.each([
    ['0x1p-4f', 0.0625],
    ['0x1.8p1', 3],
    ['.5f', 0.5],
    ['5.f', 5],
    ['1e3', 1000],
    ["1'000", 1000n],
    ['0b101', 5n],
    ['017', 15n],
    ['0xFFu', 255n],
    ['4000000000', 4000000000n],
    ['10ll', 10n],
  ])('%s', (text, value) => {
    expect(literalValue(text, usualModel).value).toBe(value);
  });

  test('the type of an integer is the first that holds it (C11, 6.4.4.1)', () => {
    const typeOf = (text: string) => literalValue(text, usualModel).type.name;
    expect(['1', '1u', '1l', '0xffffffff', '4294967295', '1ull'].map(typeOf)).toEqual([
      'int',
      'unsigned int',
      'int',
      'unsigned int',
      'long long',
      'unsigned long long',
    ]);
  });
});

/** |decimal − candidate| as an exact fraction over a common denominator, so that two of them compare. */
function distanceTo(decimal: string, candidate: number): bigint {
  const [digits, exponent] = decimal.split('e');
  const [whole, part] = digits.split('.');
  const scale = 10n ** 60n * 2n ** 200n;
  const tens = Number(exponent) - part.length;
  const exact =
    tens >= 0
      ? BigInt(whole + part) * 10n ** BigInt(tens) * scale
      : (BigInt(whole + part) * scale) / 10n ** BigInt(-tens);
  let [mantissa, twos] = [candidate, 0];
  while (!Number.isInteger(mantissa)) {
    mantissa *= 2;
    twos++;
  }
  const other = (BigInt(mantissa) * scale) / 2n ** BigInt(twos);
  return exact > other ? exact - other : other - exact;
}

function neighbourOf(value: number, step: number): number {
  const view = new DataView(new ArrayBuffer(4));
  view.setFloat32(0, value);
  const bits = view.getUint32(0);
  if (bits === 0 && step < 0) return value;
  view.setUint32(0, bits + step);
  return view.getFloat32(0);
}
