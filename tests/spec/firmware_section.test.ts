import fc from 'fast-check';
import { describe, expect, it } from 'vitest';
import type { CoefficientDefinition, NumberOrigin } from '../../src/spec/spec.js';
import { errorsOf, specOf } from './loading.js';
import { smallSpec } from './small_spec.js';

const file = 'a.pawl.yaml';
const at = (line: number, column: number) => ({ file, line, column });

/** A small spec in which one line says where the numbers stand: line 6, from column 3. */
function withOrigin(line: string, pieces: Parameters<typeof smallSpec>[0] = {}): string {
  return smallSpec(pieces).replace('  image: a.elf', `  ${line}`);
}

/** A small spec whose firmware section has no origin, and several builds before the parameters, from line 10 on. */
function withBuilds(...lines: string[]): string {
  const builds = ['builds:', ...lines.map((line) => `  ${line}`)].join('\n');
  return smallSpec().replace('  image: a.elf', '  # none').replace('parameters:', `${builds}\nparameters:`);
}

const originOf = (text: string): NumberOrigin | undefined => specOf(text).firmware?.numbers;
/** A coefficient `k` of a spec that must load; line 8, its mapping from column 8. */
function coefficient(mapping: string, pieces: Parameters<typeof smallSpec>[0] = {}): CoefficientDefinition {
  return specOf(smallSpec({ ...pieces, coefficients: `k: ${mapping}` })).firmware!.coefficients[0];
}

describe('where the numbers of a build stand', () => {
  it('is an image, with what explains it, each at its place', () => {
    const raw = withOrigin('image: out/a.bin\n  base_address: 0x08000000\n  byte_order: big');
    expect(originOf(raw)).toEqual({
      kind: 'image',
      path: 'out/a.bin',
      place: at(6, 10),
      baseAddress: { value: 0x08000000, place: at(7, 17) },
      byteOrder: { value: 'big', place: at(8, 15) },
    });
    const hex = withOrigin('image: a.hex\n  symbols: a.elf');
    expect(originOf(hex)).toMatchObject({ path: 'a.hex', symbols: { value: 'a.elf', place: at(7, 12) } });
    const split = withOrigin('image: a.elf\n  debug_file: a.debug');
    expect(originOf(split)).toMatchObject({ debugFile: { value: 'a.debug', place: at(7, 15) } });
  });

  it('is a C source with its include paths, macros and compiler', () => {
    const source =
      '{ file: gains.h, include_paths: [inc, lib/inc], defines: { BOARD: 2, NAME: x }, compiler: cc }';
    expect(originOf(withOrigin(`source: ${source}`))).toEqual({
      kind: 'source',
      path: 'gains.h',
      place: at(6, 19),
      includePaths: ['inc', 'lib/inc'],
      defines: ['BOARD=2', 'NAME=x'],
      compiler: ['cc'],
    });
    const bare = originOf(withOrigin('source: { file: gains.h, compiler: [arm-none-eabi-gcc, -mthumb] }'));
    expect(bare).toMatchObject({ includePaths: [], defines: [], compiler: ['arm-none-eabi-gcc', '-mthumb'] });
    expect(originOf(withOrigin('source: { file: gains.h }'))).toMatchObject({ compiler: undefined });
  });

  it('is a program with its arguments', () => {
    expect(originOf(withOrigin('command: [node, print-gains.mjs, 7]'))).toEqual({
      kind: 'command',
      command: ['node', 'print-gains.mjs', '7'],
      place: at(6, 3),
    });
  });

  const wrong: [what: string, line: string, error: string][] = [
    [
      'nothing',
      'build: [make]',
      '5:1: `image` is missing; expected the path of the image, relative to this file, or else `source` or `command`',
    ],
    [
      'two of them',
      'image: a.elf\n  source: { file: gains.h }',
      '7:3: `source` cannot stand beside `image`: the numbers of a build come from one of them',
    ],
    [
      'a command beside a source',
      'command: [node, x]\n  source: { file: gains.h }',
      '7:3: `source` cannot stand beside `command`: the numbers of a build come from one of them',
    ],
    [
      'symbols of a source',
      'source: { file: gains.h }\n  symbols: a.elf',
      '7:3: `symbols` belongs to `image`, but the numbers come from `source`',
    ],
    [
      'a base address of a command',
      'command: [node, x]\n  base_address: 0x0',
      '7:3: `base_address` belongs to `image`, but the numbers come from `command`',
    ],
    [
      'a base address that is none',
      'image: a.bin\n  base_address: 8000h',
      '7:17: `base_address` must be an address such as 0x08000000, but is `8000h`',
    ],
    [
      'an order that is none',
      'image: a.bin\n  byte_order: bigg',
      '7:15: `byte_order` must be little or big, but is `bigg`; did you mean `big`?',
    ],
    [
      'an order beside the file that states it',
      'image: a.hex\n  byte_order: big\n  symbols: a.elf',
      '7:3: `byte_order` cannot stand beside `symbols`: that file states the order',
    ],
    [
      'a build beside a command',
      'command: [node, x]\n  build: [make]',
      '7:3: `build` cannot stand beside `command`, which makes no file; let the command itself run the build',
    ],
    [
      'a macro that cannot be one',
      'source: { file: gains.h, defines: { 2B: 1 } }',
      '6:39: `2B` cannot be defined; expected the name of a macro, such as BOARD_B',
    ],
    [
      'a source without a file',
      'source: { include_paths: [inc] }',
      '6:3: `file` is missing; expected the path of a C or C++ source or header, relative to this file',
    ],
    [
      'a source that is a text',
      'source: gains.h',
      '6:11: `source` is `gains.h`; expected { file: gains.h, include_paths: […], defines: { … }, compiler: … }',
    ],
    [
      'a command that is a text',
      'command: node print-gains.mjs',
      '6:12: `command` is `node print-gains.mjs`; expected a list of arguments, such as [node, print-gains.mjs]',
    ],
    [
      'a misspelt key, and nothing else',
      'imige: a.elf',
      '6:3: unknown key `imige` in `firmware`; did you mean `image`?',
    ],
  ];
  it.each(wrong)('is wrong: %s', (_, line, error) => {
    expect(errorsOf(withOrigin(line))).toEqual([`${file}:${error}`]);
  });
});

describe('several builds', () => {
  it('each have an origin of any kind, and the coefficients in common', () => {
    const { firmware, builds } = specOf(
      withBuilds(
        'one: a.elf',
        'two: { image: b.bin, base_address: 0x100, build: [make, b] }',
        'three: { source: { file: gains.h, defines: { BOARD: 3 } } }',
        'four: { command: [node, print-gains.mjs] }',
      ),
    );
    expect(builds?.map(({ name, firmware: { numbers, build } }) => [name, numbers.kind, build])).toEqual([
      ['one', 'image', undefined],
      ['two', 'image', ['make', 'b']],
      ['three', 'source', undefined],
      ['four', 'command', undefined],
    ]);
    expect(builds![1].firmware.numbers).toMatchObject({ path: 'b.bin', baseAddress: { value: 0x100 } });
    expect(builds![0].firmware.numbers).toMatchObject({ path: 'a.elf', place: at(10, 8) });
    for (const one of builds!) expect(one.firmware.coefficients).toBe(firmware!.coefficients);
  });

  it('take the build command of `firmware`, but for one whose command prints the numbers', () => {
    const text = withBuilds('one: a.elf', 'two: { command: [node, x] }').replace('# none', 'build: [make]');
    expect(specOf(text).builds?.map(({ firmware }) => firmware.build)).toEqual([['make'], undefined]);
  });

  it('may each have requirements of their own', () => {
    const two = withBuilds('one: a.elf', 'two: b.elf');
    const of = (builds: string): (string[] | undefined)[] =>
      specOf(two.replace(', measure:', `, builds: ${builds}, measure:`)).requirements.map(
        ({ forBuilds }) => forBuilds,
      );
    expect(of('[two, one]')[0]).toEqual(['two', 'one']);
    expect(specOf(two).requirements[0].forBuilds).toBeUndefined();
    expect(errorsOf(two.replace(', measure:', ', builds: ones, measure:'))[0]).toMatch(
      /there is no build `ones`; did you mean `one`\?$/,
    );
    expect(errorsOf(two.replace(', measure:', ', builds: one, measure:'))[0]).toMatch(
      /:11:3: no requirement is for the build `two`; leave it out, or name it in a requirement's `builds`$/,
    );
    expect(errorsOf(smallSpec().replace(', measure:', ', builds: one, measure:'))[0]).toMatch(
      /the spec has one build only; leave `builds` out/,
    );
  });

  const wrong: [what: string, text: string, error: string][] = [
    [
      'one without an origin',
      withBuilds('one: { build: [make] }'),
      '10:3: `image` is missing; expected the path of the image, relative to this file, or else `source` or `command`',
    ],
    [
      'an origin in `firmware` too',
      withBuilds('one: a.elf').replace('# none', 'symbols: b.elf'),
      '6:3: the images stand in `builds`; leave `symbols` out here',
    ],
    [
      'one with two origins',
      withBuilds('one: { image: a.elf, command: [x] }'),
      '10:24: `command` cannot stand beside `image`: the numbers of a build come from one of them',
    ],
  ];
  it.each(wrong)('are wrong: %s', (_, text, error) => {
    expect(errorsOf(text)).toEqual([`${file}:${error}`]);
  });
});

describe('a coefficient', () => {
  it('may be scaled, by numbers, constants, or what is reckoned from them', () => {
    expect(coefficient('{ at: k, scale: 0.01, offset: -40 }')).toMatchObject({ scale: 0.01, offset: -40 });
    expect(coefficient('{ at: k, scale: 1/256 }').scale).toBe(1 / 256);
    const constants = 'step: 0.5';
    expect(coefficient('{ at: k, scale: step/2, offset: step }', { constants })).toMatchObject({
      scale: 0.25,
      offset: 0.5,
    });
    expect(coefficient('{ at: "k[0]", scale: [1, 2], offset: [3, 5 %] }')).toMatchObject({
      scale: [1, 2],
      offset: [3, 0.05],
    });
    expect(coefficient('k')).toMatchObject({ scale: undefined, offset: undefined });
  });

  it('may stand at an address, with its format and how many there are', () => {
    expect(coefficient('{ address: 0x08001f40, format: Q2.14 }')).toMatchObject({
      at: '',
      atPlace: at(8, 19),
      address: 0x08001f40,
      format: 'Q2.14',
      count: undefined,
    });
    const signals = 'command: { value: "k[1]*(goal - seen)", unit: V }';
    expect(coefficient('{ address: 64, count: 5, format: float32 }', { signals })).toMatchObject({
      address: 64,
      count: 5,
    });
  });

  it('may say that it starts at zero', () => {
    expect(coefficient('{ at: k, starts_at_zero: true }').startsAtZero).toBe(true);
    expect(coefficient('{ at: k, starts_at_zero: false }').startsAtZero).toBe(false);
    expect(coefficient('{ at: k }').startsAtZero).toBeUndefined();
  });

  const wrong: [what: string, mapping: string, error: string][] = [
    [
      'nowhere',
      '{ format: int16 }',
      '8:5: `at` is missing; expected where it is in the build, such as drive.gains.kp, or else `address`',
    ],
    [
      'in two places',
      '{ at: k, address: 0x10, format: int16 }',
      '8:17: `address` cannot stand beside `at`: one of them says where it is',
    ],
    [
      'at an address without a format',
      '{ address: 0x10 }',
      '8:10: `address` needs `format`, such as float32 or Q2.14',
    ],
    [
      'at no address',
      '{ address: 0x1g, format: int16 }',
      '8:19: `address` must be an address such as 0x08000000, but is `0x1g`',
    ],
    [
      'beyond every address',
      '{ address: 0xffffffffffffffff, format: int16 }',
      '8:19: `address` must be an address such as 0x08000000, but is `0xffffffffffffffff`',
    ],
    [
      'several by name',
      '{ at: k, count: 3 }',
      '8:17: `count` belongs to `address`; a name knows how many numbers it has',
    ],
    [
      'none at all',
      '{ address: 0x10, format: int16, count: 0 }',
      '8:47: `count` must be a whole number from 1 to 1048576, but is `0`',
    ],
    ['all the same', '{ at: k, scale: 1 - 1 }', '8:24: `scale` cannot be 0: every number would be the same'],
    ['endless', '{ at: k, offset: 1/0 }', '8:25: `offset` must be a finite number'],
    ['scaled with a unit', '{ at: k, scale: 5 mV }', '8:24: `scale` must be a plain number, but this is V'],
    ['scaled by what only a run knows', '{ at: k, scale: goal }', '8:24: `goal` is an input'],
    [
      'neither true nor false',
      '{ at: k, starts_at_zero: yes }',
      '8:33: `starts_at_zero` must be true or false, but is `yes`',
    ],
    ['misspelt', '{ at: k, adress: 0x10 }', '8:17: unknown key `adress` in `k`; did you mean `address`?'],
  ];
  it.each(wrong)('is wrong: %s', (_, mapping, error) => {
    const errors = errorsOf(smallSpec({ coefficients: `k: ${mapping}` }));
    expect(errors).toHaveLength(1);
    expect(errors[0]).toContain(`${file}:${error}`);
  });

  it('has no address where nothing is stored on a target', () => {
    const coefficients = 'k: { address: 0x10, format: int16 }';
    const of = (kind: string) =>
      `${file}:8:19: \`0x10\` is an address in an image, but the numbers come from \`${kind}\`; give a name`;
    expect(errorsOf(withOrigin('source: { file: gains.h }', { coefficients }))).toEqual([of('source')]);
    expect(errorsOf(withOrigin('command: [node, x]', { coefficients }))).toEqual([of('command')]);
    const builds = withBuilds('one: a.elf', 'two: { command: [node, x] }');
    expect(errorsOf(builds.replace('k: k', coefficients))).toEqual([of('command')]);
    expect(errorsOf(withOrigin('image: a.hex', { coefficients }))).toEqual([]);
  });

  it('has every address that a spec writes, in hexadecimal and in decimal digits', () => {
    fc.assert(
      fc.property(fc.maxSafeNat(), fc.boolean(), (address, hexadecimal) => {
        const written = hexadecimal ? `0x${address.toString(16)}` : String(address);
        expect(coefficient(`{ address: ${written}, format: int8 }`).address).toBe(address);
      }),
      { numRuns: 30 },
    );
  });
});
