import { describe, expect, test } from 'vitest';
import { at, encoding, form, tag } from '../../src/firmware/dwarf/codes.js';
import { describeImage, matchPaths, openImage, readCoefficient } from '../../src/firmware/index.js';
import { ByteWriter } from './byte_writer.js';
import {
  addressOf,
  baseType,
  debugSections,
  type EntrySpec,
  type UnitSpec,
  variable,
} from './dwarf_builder.js';
import { allocated, elfOf, type SectionSpec } from './elf_builder.js';

/** Several units: only those which can hold a name are read, wherever the name is kept, and all of them agree. */
const float = baseType('float', 'float', 4, encoding.float);
const contents = new ByteWriter();
for (const value of [1, 2, 3, 4]) contents.u32(new Uint32Array(new Float32Array([value]).buffer)[0]);
const data: SectionSpec = { name: '.rodata', flags: allocated, address: 0x1000, bytes: contents.result };

const unitOf = (...entries: EntrySpec[]): UnitSpec => ({ entries: [float, ...entries] });
const filler = (count: number) =>
  Array.from({ length: count }, (_, i) => unitOf(variable(`filler_${i}`, 'float', 0x1008)));
const open = (sections: SectionSpec[]) => openImage(elfOf({ sections: [data, ...sections] }), 'units.elf');
const value = (sections: SectionSpec[], path: string) =>
  readCoefficient(open(sections), { name: 'gain', at: path }).elements[0].value;

describe('laziness', () => {
  test('a unit without the name may be damaged: it is not read', () => {
    const sections = debugSections(
      ...filler(3),
      unitOf(variable('kp', 'float', 0x1004)),
      unitOf(variable('spoiled', 'float', 0x1000)),
    );
    // The abbreviations of the last unit are overwritten.
    const bytes = sections[1].bytes!;
    bytes.fill(0xff, bytes.length - 20);
    expect(value(sections, 'kp')).toBe(2);
    expect(() => value(sections, 'spoiled')).toThrow(/\.debug_abbrev of “units\.elf” is damaged/);
  });

  test('names which are parts of other names are told apart', () => {
    const sections = debugSections(
      ...filler(3),
      unitOf(variable('my_kp', 'float', 0x1000)),
      unitOf(variable('kp', 'float', 0x1004)),
      unitOf(variable('kp2', 'float', 0x1008)),
    );
    expect([value(sections, 'my_kp'), value(sections, 'kp'), value(sections, 'kp2')]).toEqual([1, 2, 3]);
  });
});

describe('where names are kept', () => {
  const byForm = (name: EntrySpec['attributes'][number], address: number): EntrySpec => ({
    tag: tag.variable,
    attributes: [
      name,
      [at.type, form.ref4, { to: 'float' }],
      [at.location, form.exprloc, addressOf(address)],
    ],
  });

  test('in the text section, also as the tail of a longer text', () => {
    const texts = new ByteWriter().text('unused').text('azimuth_kp').result;
    const sections = debugSections(
      ...filler(3),
      unitOf(byForm([at.name, form.strp, 7], 0x1000)),
      unitOf(byForm([at.name, form.strp, 15], 0x1004)),
    );
    sections.push({ name: '.debug_str', bytes: texts });
    expect([value(sections, 'azimuth_kp'), value(sections, 'kp')]).toEqual([1, 2]);
  });

  test('by index, each unit with its own part of the offsets', () => {
    const texts = new ByteWriter().text('ki').text('kp').result;
    const offsets = new ByteWriter();
    const parts = [[3], [0]].map((list) => {
      offsets
        .u32(4 + 4 * list.length)
        .u16(5)
        .u16(0);
      const base = offsets.length;
      for (const offset of list) offsets.u32(offset);
      return base;
    });
    const unit = (base: number, address: number): UnitSpec => ({
      ...unitOf(byForm([at.name, form.strx1, 0], address)),
      version: 5,
      attributes: [[at.stringOffsetsBase, form.secOffset, base]],
    });
    const others = filler(2).map((other): UnitSpec => ({ ...other, version: 5 }));
    const sections = [
      ...debugSections(...others, unit(parts[0], 0x1000), unit(parts[1], 0x1004)),
      { name: '.debug_str', bytes: texts },
      { name: '.debug_str_offsets', bytes: offsets.result },
    ];
    expect([value(sections, 'kp'), value(sections, 'ki')]).toEqual([1, 2]);
  });

  test('an address by index', () => {
    const addresses = new ByteWriter().u32(20).u16(5).u8(8).u8(0).u64(0x1000).u64(0x100c).result;
    const entry: EntrySpec = {
      tag: tag.variable,
      attributes: [
        [at.name, form.string, 'kp'],
        [at.type, form.ref4, { to: 'float' }],
        [at.location, form.exprloc, Uint8Array.from([0xa1, 1])],
      ],
    };
    const sections = debugSections({
      ...unitOf(entry),
      version: 5,
      attributes: [[at.addressBase, form.secOffset, 8]],
    });
    expect(value([...sections, { name: '.debug_addr', bytes: addresses }], 'kp')).toBe(4);
  });

  test('an offset past the texts is damage, with its place', () => {
    const sections = debugSections(unitOf(byForm([at.name, form.strp, 999], 0x1000)));
    expect(() => value([...sections, { name: '.debug_str', bytes: Uint8Array.from([0]) }], 'kp')).toThrow(
      /\.debug_str of “units\.elf” is damaged.*offset 0x3e7, outside/,
    );
  });
});

describe('where a variable is declared', () => {
  const declared = (file: number, line: number): EntrySpec => {
    const entry = variable('kp', 'float', 0x1000);
    entry.attributes.push([at.declarationFile, form.data1, file], [at.declarationLine, form.data2, line]);
    return entry;
  };
  const withLines = (unit: UnitSpec, lines: Uint8Array, folder = '/build/fw') => {
    const attributes: UnitSpec['attributes'] = [
      [at.statementList, form.secOffset, 0],
      [at.compilationFolder, form.string, folder],
    ];
    const image = open([...debugSections({ ...unit, attributes }), { name: '.debug_line', bytes: lines }]);
    return readCoefficient(image, { name: 'gain', at: 'kp' }).declaredAt;
  };

  /** Line tables of versions 2 to 4: folders and files as texts, numbers from 1. */
  const oldTable = (version: number, folders: string[], files: [string, number][]) => {
    const rest = new ByteWriter().u8(1);
    if (version >= 4) rest.u8(1);
    rest.u8(1).u8(0xfb).u8(14).u8(13).raw(new Uint8Array(12));
    for (const folder of folders) rest.text(folder);
    rest.u8(0);
    for (const [name, folder] of files) rest.text(name).uleb(folder).uleb(0).uleb(0);
    rest.u8(0);
    return new ByteWriter()
      .u32(rest.length + 6)
      .u16(version)
      .u32(rest.length)
      .raw(rest.result).result;
  };

  /** Line tables of version 5: rows whose columns the table states itself, numbers from 0. */
  const newTable = (folders: string[], files: [string, number][]) => {
    const rest = new ByteWriter().u8(1).u8(1).u8(1).u8(0xfb).u8(14).u8(13).raw(new Uint8Array(12));
    rest.u8(1).uleb(1).uleb(form.string).uleb(folders.length);
    for (const folder of folders) rest.text(folder);
    rest
      .u8(3)
      .uleb(1)
      .uleb(form.string)
      .uleb(2)
      .uleb(form.udata)
      .uleb(5)
      .uleb(form.data16)
      .uleb(files.length);
    for (const [name, folder] of files) rest.text(name).uleb(folder).raw(new Uint8Array(16));
    return new ByteWriter()
      .u32(rest.length + 8)
      .u16(5)
      .u8(8)
      .u8(0)
      .u32(rest.length)
      .raw(rest.result).result;
  };

  test.each([2, 3, 4])('line table version %i', (version) => {
    const table = oldTable(
      version,
      ['drive', '/usr/include'],
      [
        ['main.c', 0],
        ['azimuth.c', 1],
        ['math.h', 2],
      ],
    );
    expect(withLines(unitOf(declared(1, 7)), table)).toEqual({ file: 'main.c', line: 7 });
    expect(withLines(unitOf(declared(2, 300)), table)).toEqual({ file: 'drive/azimuth.c', line: 300 });
    expect(withLines(unitOf(declared(3, 1)), table)).toEqual({ file: '../../usr/include/math.h', line: 1 });
    expect(withLines(unitOf(declared(9, 1)), table)).toBeUndefined();
  });

  test('line table version 5', () => {
    const table = newTable(
      ['/build/fw', 'drive', '/build/common'],
      [
        ['main.c', 0],
        ['azimuth.c', 1],
        ['gains.h', 2],
      ],
    );
    const unit = (file: number) => ({ ...unitOf(declared(file, 12)), version: 5 as const });
    expect(withLines(unit(0), table)).toEqual({ file: 'main.c', line: 12 });
    expect(withLines(unit(1), table)).toEqual({ file: 'drive/azimuth.c', line: 12 });
    expect(withLines(unit(2), table)).toEqual({ file: '../common/gains.h', line: 12 });
  });

  test('a file far from the folder keeps its full path', () => {
    const table = oldTable(4, ['/opt/toolchain/include'], [['gains.h', 1]]);
    expect(withLines(unitOf(declared(1, 3)), table, '/a/b/c/d/e')).toEqual({
      file: '/opt/toolchain/include/gains.h',
      line: 3,
    });
  });

  test('a damaged table is an error, never a wrong line', () => {
    const table = oldTable(4, [], [['main.c', 0]]);
    expect(() => withLines(unitOf(declared(1, 7)), table.slice(0, -4))).toThrow(
      /\.debug_line of “units\.elf” is damaged/,
    );
    table[4] = 9;
    expect(() => withLines(unitOf(declared(1, 7)), table)).toThrow(
      /line table version 9, versions 2 to 5 can be read/,
    );
    const many = newTable([], []);
    many[many.length - 1] = 0x7f;
    expect(() => withLines({ ...unitOf(declared(1, 7)), version: 5 }, many)).toThrow(
      /a table of 127 names|damaged/,
    );
  });

  test('without a line table there is no place, and still a value', () => {
    const image = open(debugSections(unitOf(declared(1, 7))));
    expect(readCoefficient(image, { name: 'gain', at: 'kp' }).declaredAt).toBeUndefined();
  });
});

describe('definitions and declarations', () => {
  const declaration = (label: string, name: string): EntrySpec => ({
    tag: tag.variable,
    label,
    attributes: [
      [at.name, form.string, name],
      [at.type, form.ref4, { to: 'float' }],
      [at.declaration, form.flagPresent, 1],
      [at.external, form.flagPresent, 1],
    ],
  });
  const definition = (of: string, address: number): EntrySpec => ({
    tag: tag.variable,
    attributes: [
      [at.specification, form.ref4, { to: of }],
      [at.location, form.exprloc, addressOf(address)],
    ],
  });

  test('a definition has name, type and scopes from its declaration', () => {
    const scope: EntrySpec = {
      tag: tag.namespace,
      attributes: [[at.name, form.string, 'drive']],
      children: [
        {
          tag: tag.classType,
          attributes: [
            [at.name, form.string, 'Limits'],
            [at.byteSize, form.data1, 1],
          ],
          children: [declaration('d', 'slope')],
        },
      ],
    };
    const sections = debugSections(unitOf(scope, definition('d', 0x1008)));
    expect(value(sections, 'drive::Limits::slope')).toBe(3);
    expect(value(sections, 'Limits::slope')).toBe(3);
    expect(value(sections, 'slope')).toBe(3);
    expect(() => value(sections, 'drive::slope')).toThrow(
      /has no variable “drive::slope”; nearest: .*“drive::Limits::slope”/,
    );
    expect(matchPaths(open(sections), '**')).toEqual(['drive::Limits::slope']);
  });

  test('a mere declaration takes its address from the symbol, its type from here', () => {
    const sections = [data, ...debugSections(unitOf(declaration('d', 'kp')))];
    const image = openImage(
      elfOf({ sections, symbols: [{ name: 'kp', address: 0x1004, size: 4 }] }),
      'units.elf',
    );
    expect(readCoefficient(image, { name: 'gain', at: 'kp' })).toMatchObject({
      type: 'float',
      elements: [{ value: 2, address: 0x1004 }],
    });
  });

  test('a mere declaration without a symbol is an error', () => {
    expect(() => value(debugSections(unitOf(declaration('d', 'kp'))), 'kp')).toThrow(
      /is only declared in “units\.elf”; the image has no symbol table/,
    );
  });

  test('a static variable of a function gives way to a global one, and is named by its function', () => {
    const update: EntrySpec = {
      tag: tag.subprogram,
      attributes: [[at.name, form.string, 'update']],
      children: [variable('kp', 'float', 0x1004)],
    };
    const sections = debugSections(unitOf(update, variable('kp', 'float', 0x1000)));
    expect([value(sections, 'kp'), value(sections, 'update::kp')]).toEqual([1, 2]);
    expect(value(debugSections(unitOf(update)), 'kp')).toBe(2);
  });

  test('what lives in a register or on the stack is no coefficient', () => {
    const local: EntrySpec = {
      tag: tag.subprogram,
      attributes: [[at.name, form.string, 'update']],
      children: [
        {
          tag: tag.variable,
          attributes: [
            [at.name, form.string, 'kp'],
            [at.type, form.ref4, { to: 'float' }],
            [at.location, form.exprloc, Uint8Array.from([0x91, 0x70])],
          ],
        },
        {
          tag: tag.variable,
          attributes: [
            [at.name, form.string, 'half'],
            [at.type, form.ref4, { to: 'float' }],
            [at.constValue, form.data4, 0x3f000000],
          ],
        },
      ],
    };
    expect(() => value(debugSections(unitOf(local)), 'kp')).toThrow(/has no variable “kp”/);
    // A local variable that happens to be constant at one place is none either; only what is declared const is.
    expect(() => value(debugSections(unitOf(local)), 'half')).toThrow(/has no variable “half”/);
  });

  test('two units that place one name differently are told apart by file', () => {
    const sections = debugSections(
      unitOf(variable('kp', 'float', 0x1000)),
      unitOf(variable('kp', 'float', 0x1004)),
    );
    expect(() => value(sections, 'kp')).toThrow(
      /“kp” can mean “built\.c:kp” or “built1\.c:kp”: write one of these/,
    );
    expect([value(sections, 'built.c:kp'), value(sections, 'built1.c:kp')]).toEqual([1, 2]);
    expect(matchPaths(open(sections), '**')).toEqual(['built.c:kp', 'built1.c:kp']);
  });

  test('one place that two units describe is one variable', () => {
    const sections = debugSections(
      unitOf(variable('kp', 'float', 0x1000)),
      unitOf(variable('kp', 'float', 0x1000)),
    );
    expect(value(sections, 'kp')).toBe(1);
    expect(matchPaths(open(sections), '**')).toEqual(['kp']);
  });
});

test('all compilers that took part are named once', () => {
  const made = (producer: string): UnitSpec => ({
    ...unitOf(),
    attributes: [[at.producer, form.string, producer]],
  });
  expect(
    describeImage(open(debugSections(made('GNU C17 12.2'), made('clang 14'), made('GNU C17 12.2'))))
      .producers,
  ).toEqual(['GNU C17 12.2', 'clang 14']);
});

describe('languages', () => {
  const staticMember: EntrySpec = {
    tag: tag.structureType,
    attributes: [
      [at.name, form.string, 'Limits'],
      [at.byteSize, form.data1, 4],
    ],
    children: [
      {
        tag: tag.member,
        attributes: [
          [at.name, form.string, 'slope'],
          [at.type, form.ref4, { to: 'float' }],
          [at.external, form.flagPresent, 1],
          [at.constValue, form.data4, 0x3f000000],
        ],
      },
    ],
  };
  const inLanguage = (language: number) =>
    debugSections({
      ...unitOf(staticMember, variable('kp', 'float', 0x1004)),
      attributes: [[at.language, form.data1, language]],
    });

  // Numbers of DWARF 5, table 7.17: C++ 0x04, C++14 0x21, C99 0x0c, C11 0x1d.
  test.each([0x04, 0x21])('language 0x%i has static members, also of constant value', (language) => {
    expect(value(inLanguage(language), 'Limits::slope')).toBe(0.5);
    expect(value(inLanguage(language), 'kp')).toBe(2);
  });

  test.each([0x0c, 0x1d])('language 0x%i has none: its structs are passed over', (language) => {
    expect(() => value(inLanguage(language), 'Limits::slope')).toThrow(/has no variable “Limits::slope”/);
    expect(value(inLanguage(language), 'kp')).toBe(2);
  });
});
