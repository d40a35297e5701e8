import { deflateSync } from 'node:zlib';
import { describe, expect, test } from 'vitest';
import { at, encoding, form, tag } from '../../src/firmware/dwarf/codes.js';
import { FirmwareError, openImage, readCoefficient } from '../../src/firmware/index.js';
import { ByteWriter } from './byte_writer.js';
import { addressOf, baseType, debugSections, type EntrySpec, variable } from './dwarf_builder.js';
import { allocated, elfOf, noBits, type SectionSpec } from './elf_builder.js';

/** What a compiler never writes, and a damaged or hostile file may hold: each must end in a clear error, soon. */
const data: SectionSpec = {
  name: '.rodata',
  flags: allocated,
  address: 0x1000,
  bytes: new ByteWriter().u32(0x3fa00000).u32(0xffffffff).u64(0x0123456789abcdefn).result,
};
const float = baseType('float', 'float', 4, encoding.float);

function read(entries: EntrySpec[], path = 'kp', sections: SectionSpec[] = [data]) {
  const bytes = elfOf({ sections: [...sections, ...debugSections({ entries })] });
  return readCoefficient(openImage(bytes, 'built.elf'), { name: 'gain', at: path });
}

function failure(work: () => unknown): FirmwareError {
  try {
    work();
  } catch (error) {
    if (error instanceof FirmwareError) return error;
    throw error;
  }
  throw new Error('an error was expected');
}

test('the builder makes images that can be read', () => {
  const coefficient = read([float, variable('kp', 'float', 0x1000)]);
  expect(coefficient.elements).toEqual([
    { value: 1.25, stored: '0x3fa00000', address: 0x1000, quantum: 2 ** -23 },
  ]);
});

describe('types', () => {
  test('a typedef that refers to itself', () => {
    const cycle: EntrySpec = {
      tag: tag.typedef,
      label: 'a',
      attributes: [[at.type, form.ref4, { to: 'a' }]],
    };
    const error = failure(() => read([cycle, variable('kp', 'a', 0x1000)]));
    expect(error.code).toBe('malformed_image');
    expect(error.message).toMatch(/kp.*refers to itself/);
  });

  test('a cycle of const, array and typedef', () => {
    const entries: EntrySpec[] = [
      { tag: tag.constType, label: 'a', attributes: [[at.type, form.ref4, { to: 'b' }]] },
      { tag: tag.arrayType, label: 'b', attributes: [[at.type, form.ref4, { to: 'c' }]] },
      { tag: tag.typedef, label: 'c', attributes: [[at.type, form.ref4, { to: 'a' }]] },
      variable('kp', 'a', 0x1000),
    ];
    expect(failure(() => read(entries)).message).toMatch(/refers to itself/);
  });

  test('a struct that contains itself is read as far as it is asked for, and no further', () => {
    const self: EntrySpec = {
      tag: tag.structureType,
      label: 's',
      attributes: [
        [at.name, form.string, 'self'],
        [at.byteSize, form.data1, 4],
      ],
      children: [member('inner', 's', 0), member('gain', 'float', 0)],
    };
    const entries = [float, self, variable('kp', 's', 0x1000)];
    expect(read(entries, 'kp.inner.inner.gain').elements[0].value).toBe(1.25);
    expect(failure(() => read(entries, 'kp.inner')).code).toBe('not_a_number');
  });

  test('an anonymous struct that contains itself has no end of members, and is given up', () => {
    const self: EntrySpec = {
      tag: tag.structureType,
      label: 's',
      attributes: [[at.byteSize, form.data1, 4]],
      children: [{ tag: tag.member, attributes: [[at.type, form.ref4, { to: 's' }]] }],
    };
    expect(failure(() => read([self, variable('kp', 's', 0x1000)], 'kp.gain')).code).toBe('no_such_member');
  });

  test('a definition whose specification is itself', () => {
    const entry: EntrySpec = {
      tag: tag.variable,
      label: 'v',
      attributes: [
        [at.specification, form.ref4, { to: 'v' }],
        [at.location, form.exprloc, addressOf(0x1000)],
      ],
    };
    expect(failure(() => read([float, entry])).code).toBe('no_such_symbol');
  });

  test('a reference out of the unit', () => {
    const error = failure(() => read([variable('kp', 'nowhere', 0x1000)]));
    expect(error.code).toBe('malformed_image');
    expect(error.message).toMatch(/\.debug_info of “built\.elf” is damaged/);
  });

  test('an array of four thousand million elements', () => {
    const entries: EntrySpec[] = [
      float,
      {
        tag: tag.arrayType,
        label: 'a',
        attributes: [[at.type, form.ref4, { to: 'float' }]],
        children: [{ tag: tag.subrangeType, attributes: [[at.count, form.data4, 0xfffffff0]] }],
      },
      variable('kp', 'a', 0x1000),
    ];
    expect(failure(() => read(entries)).message).toMatch(/4294967280 elements, at most/);
    expect(read(entries, 'kp[0]').elements[0].value).toBe(1.25);
    expect(failure(() => read(entries, 'kp[4]')).message).toMatch(/reach past the end|lies in no section/);
  });

  test.each([
    [16, encoding.float, 'long double'],
    [8, encoding.complexFloat, 'float _Complex'],
    [4, encoding.decimalFloat, '_Decimal32'],
    [3, encoding.signed, 'int24'],
  ])('a type of %i bytes with encoding %i fails only when it is asked for', (size, code, name) => {
    const entries = [
      float,
      baseType('odd', name, size, code),
      variable('odd', 'odd', 0x1000),
      variable('kp', 'float', 0x1000),
    ];
    expect(read(entries).elements[0].value).toBe(1.25);
    const error = failure(() => read(entries, 'odd'));
    expect(error.code).toBe('not_a_number');
    expect(error.message).toContain(name);
  });

  test('a struct which is only declared', () => {
    const entries: EntrySpec[] = [
      {
        tag: tag.structureType,
        label: 's',
        attributes: [
          [at.name, form.string, 'gains'],
          [at.declaration, form.flagPresent, 1],
        ],
      },
      variable('kp', 's', 0x1000),
    ];
    const error = failure(() => read(entries, 'kp.gain'));
    expect(error.code).toBe('incomplete_type');
    expect(error.message).toMatch(/struct gains is only declared.*build the file that defines it with -g/);
  });
});

function member(name: string, type: string, offset: number): EntrySpec {
  return {
    tag: tag.member,
    attributes: [
      [at.name, form.string, name],
      [at.type, form.ref4, { to: type }],
      [at.memberLocation, form.data1, offset],
    ],
  };
}

describe('numbers of debug information', () => {
  test('an overlong LEB128', () => {
    const sections = debugSections({ entries: [float, variable('kp', 'float', 0x1000)] });
    const abbreviations = sections[1];
    abbreviations.bytes = Uint8Array.from([...Array(11).fill(0x80), 0x01, ...(abbreviations.bytes ?? [])]);
    const image = openImage(elfOf({ sections: [data, ...sections] }), 'built.elf');
    const error = failure(() => readCoefficient(image, { name: 'gain', at: 'kp' }));
    expect(error.code).toBe('malformed_image');
    expect(error.message).toMatch(/\.debug_abbrev .* a LEB128 number is longer than 10 bytes/);
  });

  test('a form which no version of DWARF knows is named, with its place', () => {
    const entry: EntrySpec = { tag: tag.variable, attributes: [[at.name, 0x7e, 'kp']] };
    const error = failure(() => read([float, entry]));
    expect(error.code).toBe('unsupported');
    expect(error.message).toMatch(/form 0x7e at offset 0x[0-9a-f]+ is not known/);
  });

  test('an attribute which is not known is passed over by its form', () => {
    const known = variable('kp', 'float', 0x1000);
    known.attributes.unshift(
      [0x3fee, form.data8, 77],
      [0x3fef, form.string, 'vendor'],
      [0x3ff0, form.block1, new Uint8Array(9)],
    );
    expect(read([float, known]).elements[0].value).toBe(1.25);
  });

  test('a unit that claims more bytes than there are', () => {
    const sections = debugSections({ entries: [float, variable('kp', 'float', 0x1000)] });
    sections[0].bytes = sections[0].bytes?.slice(0, -5);
    const error = failure(() =>
      readCoefficient(openImage(elfOf({ sections: [data, ...sections] }), 'built.elf'), {
        name: 'gain',
        at: 'kp',
      }),
    );
    expect(error.message).toMatch(/the unit claims \d+ bytes, available \d+/);
  });

  test.each([1, 6, 0xffff])('DWARF version %i', (version) => {
    const sections = debugSections({ entries: [float] });
    const bytes = sections[0].bytes!;
    new DataView(bytes.buffer).setUint16(4, version, true);
    const image = openImage(elfOf({ sections: [data, ...sections] }), 'built.elf');
    expect(failure(() => readCoefficient(image, { name: 'gain', at: 'kp' })).message).toContain(
      `DWARF version ${version}`,
    );
  });

  test('an abbreviation that the table does not have', () => {
    const sections = debugSections({ entries: [float, variable('kp', 'float', 0x1000)] });
    sections[1].bytes = Uint8Array.from([0]);
    const image = openImage(elfOf({ sections: [data, ...sections] }), 'built.elf');
    expect(failure(() => readCoefficient(image, { name: 'gain', at: 'kp' })).message).toMatch(
      /abbreviation 1 is not in the table/,
    );
  });

  test('children nested a thousand deep', () => {
    let nested: EntrySpec = variable('deep', 'float', 0x1000);
    for (let i = 0; i < 1000; i++) nested = { tag: tag.lexicalBlock, attributes: [], children: [nested] };
    const error = failure(() => read([float, nested, variable('kp', 'float', 0x1000)]));
    expect(error.message).toMatch(/nesting deeper than 256/);
  });
});

describe('locations', () => {
  const at1000 = [...addressOf(0x1000)];
  const placed = (expression: number[]): EntrySpec => ({
    tag: tag.variable,
    attributes: [
      [at.name, form.string, 'kp'],
      [at.type, form.ref4, { to: 'float' }],
      [at.location, form.exprloc, Uint8Array.from(expression)],
    ],
  });

  test.each([
    ['address', at1000],
    ['address plus constant', [...addressOf(0xff0), 0x23, 0x10]],
    ['sum on the stack', [...addressOf(0xff0), 0x40, 0x22]],
    ['difference on the stack', [...addressOf(0x1004), 0x34, 0x1c]],
    ['duplicate', [...addressOf(0x800), 0x12, 0x22]],
    ['implicit value', [0x9e, 4, 0, 0, 0xa0, 0x3f]],
    ['stack value', [0x0c, 0, 0, 0xa0, 0x3f, 0x9f]],
    ['two pieces', [...at1000, 0x93, 2, ...addressOf(0x1002), 0x93, 2]],
    ['a piece in memory and one known', [...at1000, 0x93, 2, 0x9e, 2, 0xa0, 0x3f, 0x93, 2]],
  ])('%s gives the value', (_, expression) => {
    expect(read([float, placed(expression)]).elements[0].value).toBe(1.25);
  });

  test.each([
    ['a removed piece', [...at1000, 0x93, 2, 0x93, 2], 'no_fixed_place'],
    ['a register', [0x50], 'no_fixed_place'],
    ['a thread-local variable', [0x0e, ...new Uint8Array(8), 0xe0], 'no_fixed_place'],
    ['an implicit pointer', [0xf2, 0, 0, 0, 0, 0], 'no_fixed_place'],
    ['an empty stack', [0x22], 'malformed_image'],
    ['a cut-off operand', [0x03, 0, 0], 'malformed_image'],
    ['pieces that end too early', [...at1000, 0x93, 3], 'no_fixed_place'],
    ['an empty expression', [], 'no_fixed_place'],
  ])('%s is an error', (_, expression, code) => {
    expect(failure(() => read([float, placed(expression)])).code).toBe(code);
  });

  test('an address in no section', () => {
    const error = failure(() => read([float, variable('kp', 'float', 0x5000)]));
    expect(error.code).toBe('garbage_collected');
    expect(error.message).toMatch(/kp.*is not in “built\.elf”/);
  });

  test('a constant of the debug information has no address', () => {
    const constant: EntrySpec = {
      tag: tag.variable,
      attributes: [
        [at.name, form.string, 'kp'],
        [at.type, form.ref4, { to: 'float' }],
        [at.constValue, form.data4, 0x3fa00000],
      ],
    };
    expect(read([float, constant]).elements[0]).toMatchObject({
      value: 1.25,
      stored: '0x3fa00000',
      address: undefined,
    });
  });

  test('a constant shorter than its type', () => {
    const constant: EntrySpec = {
      tag: tag.variable,
      attributes: [
        [at.name, form.string, 'kp'],
        [at.type, form.ref4, { to: 'float' }],
        [at.constValue, form.block1, Uint8Array.from([0, 0])],
      ],
    };
    expect(failure(() => read([float, constant])).message).toMatch(/has 2 bytes, wanted 4/);
  });
});

describe('sections', () => {
  test('one that ends past the end of the file', () => {
    const entries = [float, variable('kp', 'float', 0x1000)];
    const error = failure(() => read(entries, 'kp', [{ ...data, size: 0x100000 }]));
    expect(error.code).toBe('malformed_image');
    expect(error.message).toMatch(/section “\.rodata” ends at 0x[0-9a-f]+, past the end of the file at 0x/);
  });

  test('a value that straddles the end of its section', () => {
    const error = failure(() => read([float, variable('kp', 'float', 0x100e)]));
    expect(error.message).toMatch(/4 bytes at 0x100e reach past the end of section “\.rodata”/);
  });

  test('one without contents is no zero', () => {
    const bss: SectionSpec = { name: '.bss', type: noBits, flags: allocated, address: 0x1000, size: 16 };
    const entries = [float, variable('kp', 'float', 0x1000)];
    const error = failure(() => read(entries, 'kp', [bss]));
    expect(error.code).toBe('no_contents');
    expect(error.message).toMatch(/cleared at start-up.*starts_at_zero: true/);
  });

  test('two at one address that differ', () => {
    const other = { ...data, name: '.overlay', bytes: new Uint8Array(16) };
    const entries = [float, variable('kp', 'float', 0x1000)];
    expect(failure(() => read(entries, 'kp', [data, other])).code).toBe('sources_disagree');
    expect(read(entries, 'kp', [data, { ...data, name: '.copy' }]).elements[0].value).toBe(1.25);
  });

  test('a value in a segment of an image without sections', () => {
    const bytes = elfOf({
      sections: [],
      segments: [{ address: 0x2000, physical: 0x9000, bytes: data.bytes!, memorySize: 64 }],
    });
    const image = openImage(bytes, 'built.elf');
    const asked = { name: 'gain', at: 'gain', format: 'float32' };
    expect(readCoefficient(image, { ...asked, address: 0x2000 }).elements[0].value).toBe(1.25);
    expect(failure(() => readCoefficient(image, { ...asked, address: 0x2020 })).code).toBe('no_contents');
    expect(failure(() => readCoefficient(image, { ...asked, address: 0x200e })).code).toBe('malformed_image');
  });
});

describe('compressed sections', () => {
  const compressedFlag = 0x800;
  const sections = debugSections({ entries: [float, variable('kp', 'float', 0x1000)] });
  const info = sections[0].bytes!;
  const packedInfo = (size: number, method = 1, contents: Uint8Array = deflateSync(info)): SectionSpec => ({
    name: '.debug_info',
    flags: compressedFlag,
    bytes: new ByteWriter().u32(method).u32(0).u64(size).u64(1).raw(contents).result,
  });
  const readPacked = (packed: SectionSpec) =>
    readCoefficient(openImage(elfOf({ sections: [data, packed, sections[1]] }), 'built.elf'), {
      name: 'gain',
      at: 'kp',
    });

  test('a sound one is read', () => {
    expect(readPacked(packedInfo(info.length)).elements[0].value).toBe(1.25);
  });

  test('the old way of GNU is read', () => {
    const old = new ByteWriter(false).raw(Buffer.from('ZLIB')).u64(info.length).raw(deflateSync(info)).result;
    expect(readPacked({ name: '.zdebug_info', bytes: old }).elements[0].value).toBe(1.25);
  });

  test('a decompression bomb is refused before it is opened', () => {
    const bomb = packedInfo(0x7fff_ffff);
    const before = process.memoryUsage().rss;
    const error = failure(() => readPacked(bomb));
    expect(error.message).toMatch(/claims to expand from \d+ to 2147483647 bytes: refused/);
    expect(process.memoryUsage().rss - before).toBeLessThan(100e6);
  });

  test('one that expands further than it claims stops there', () => {
    const bomb = deflateSync(new Uint8Array(50e6));
    const error = failure(() => readPacked(packedInfo(1000, 1, bomb)));
    expect(error.message).toMatch(/cannot be decompressed/);
  });

  test('one that expands to less', () => {
    expect(failure(() => readPacked(packedInfo(info.length + 10))).message).toMatch(
      /expands to \d+ bytes, but claims \d+/,
    );
  });

  test('damaged contents', () => {
    expect(failure(() => readPacked(packedInfo(info.length, 1, Uint8Array.from([1, 2, 3])))).message).toMatch(
      /cannot be decompressed/,
    );
  });

  test('Zstandard is read where Node offers it, and refused with the cure where it does not', () => {
    const zlib = process.getBuiltinModule('node:zlib') as {
      zstdCompressSync?: (bytes: Uint8Array) => Uint8Array;
    };
    const packed = packedInfo(info.length, 2, zlib.zstdCompressSync?.(info));
    if (zlib.zstdCompressSync) expect(readPacked(packed).elements[0].value).toBe(1.25);
    else
      expect(failure(() => readPacked(packed)).message).toMatch(
        /Zstandard.*Node 22\.15 or newer, or build with -gz=zlib/,
      );
  });

  test('a method that is not known says which to use', () => {
    const error = failure(() => readPacked(packedInfo(info.length, 9)));
    expect(error.code).toBe('unsupported');
    expect(error.message).toMatch(/method 9, which is not known: build with -gz=zlib/);
  });
});

test('a name that moves the cursor of a terminal is made harmless', () => {
  const evil = baseType('evil', 'long\u001b[2J\u0007\r\ndouble', 16, encoding.float);
  const error = failure(() => read([evil, variable('kp', 'evil', 0x1000)]));
  expect(error.message).toMatch(/^[\x20-\x7e\u00a0-\uffff]+$/);
  expect(error.message).toContain('long?[2J? double');
});

describe('what is no image', () => {
  test.each([
    [[], /“x” is empty/],
    [[0x7f, 0x45, 0x4c, 0x47], /begins with 7f 45 4c 47; a raw binary needs its base address/],
    [[...Buffer.from('#!/bin/sh')], /is not an ELF file \(7f 45 4c 46\), Intel HEX or S-records/],
  ])('%j', (bytes, message) => {
    const error = failure(() => openImage(Uint8Array.from(bytes), 'x'));
    expect(error.code).toBe('not_an_image');
    expect(error.message).toMatch(message);
  });

  test.each([
    [4, 3, /ELF class 3, expected 1 \(32 bit\) or 2 \(64 bit\)/],
    [5, 0, /ELF byte order 0, expected 1 \(little\) or 2 \(big\)/],
    [16, 4, /ELF type 4; an executable, shared or relocatable file is expected/],
    [58, 8, /rows of 8 bytes, expected 64/],
    [60, 0xff, /\d+ sections do not fit the file|is damaged/],
  ])('an ELF header whose byte %i is %i', (offset, value, message) => {
    const bytes = elfOf({ sections: [data] });
    bytes[offset] = value;
    if (offset === 60) bytes[61] = 0xfe;
    expect(failure(() => openImage(bytes, 'x')).message).toMatch(message);
  });

  test('every beginning of an image is an error', () => {
    const bytes = elfOf({
      sections: [data, ...debugSections({ entries: [float, variable('kp', 'float', 0x1000)] })],
      symbols: [{ name: 'kp', address: 0x1000, size: 4 }],
    });
    // The last field of the last row of the section table is not read.
    for (let length = 1; length < bytes.length - 8; length++) {
      expect(failure(() => openImage(bytes.subarray(0, length), 'cut')).message).not.toBe('');
    }
    expect(readCoefficient(openImage(bytes, 'whole'), { name: 'gain', at: 'kp' }).elements[0].value).toBe(
      1.25,
    );
  });
});
