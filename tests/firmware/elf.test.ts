import fc from 'fast-check';
import { describe, expect, test } from 'vitest';
import { contentsOf, sectionNamed } from '../../src/firmware/elf/contents.js';
import { crc32, debugLinkOf } from '../../src/firmware/elf/debug_link.js';
import { openElf } from '../../src/firmware/elf/elf_file.js';
import { buildIdOf, compilerComments } from '../../src/firmware/elf/identity.js';
import { machineName } from '../../src/firmware/elf/machine.js';
import { hasContents, isPlaced, physicalAddress, readMemory } from '../../src/firmware/elf/memory.js';
import {
  allSymbols,
  dataSymbolsAt,
  fileOfSymbol,
  hasSymbols,
  isData,
  symbolAt,
  symbolsNamed,
} from '../../src/firmware/elf/symbols.js';
import { describeImage, openImage, readCoefficient } from '../../src/firmware/index.js';
import { ByteWriter } from './byte_writer.js';
import { allocated, type ElfSpec, elfOf, noBits, type SymbolSpec } from './elf_builder.js';

/** The tables of an ELF file, in all four combinations of width and byte order: what was written is what is read. */
const kinds = [32, 64].flatMap((bits) =>
  [true, false].map((littleEndian) => ({ bits: bits as 32 | 64, littleEndian })),
);
const name = fc.stringMatching(/^[a-z_][a-z0-9_]{0,12}$/);

describe.each(kinds)('$bits bit, little-endian: $littleEndian', (kind) => {
  const open = (spec: ElfSpec) => openElf(elfOf({ ...kind, ...spec }), 'a.elf');

  test('sections come back with their bytes, sizes and addresses', () => {
    const section = fc.record({
      name,
      address: fc.nat(2 ** 31),
      bytes: fc.uint8Array({ minLength: 1, maxLength: 40 }),
      flags: fc.constantFrom(0, allocated),
    });
    fc.assert(
      fc.property(fc.array(section, { minLength: 1, maxLength: 6 }), (sections) => {
        const elf = open({ sections });
        expect(elf).toMatchObject({ ...kind, relocatable: false });
        for (const [i, spec] of sections.entries()) {
          const read = elf.sections[i + 1];
          expect(read).toMatchObject({
            name: spec.name,
            address: spec.address,
            size: spec.bytes.length,
            flags: spec.flags,
          });
          expect(contentsOf(elf, read)).toEqual(spec.bytes);
        }
      }),
      { numRuns: 40 },
    );
  });

  test('symbols come back, and are found by name and by address', () => {
    const symbol = fc.record({
      name,
      address: fc.integer({ min: 0x1000, max: 0x10ff }),
      size: fc.integer({ min: 1, max: 16 }),
      local: fc.boolean(),
    });
    fc.assert(
      fc.property(fc.array(symbol, { minLength: 1, maxLength: 20 }), (symbols: SymbolSpec[]) => {
        const elf = open({
          sections: [{ name: '.rodata', flags: allocated, address: 0x1000, bytes: new Uint8Array(256) }],
          symbols,
        });
        expect(hasSymbols(elf)).toBe(true);
        // Asked for before all are decoded and after: the two ways must agree.
        const found = symbols.map((spec) => symbolsNamed(elf, spec.name));
        expect(allSymbols(elf).slice(1)).toMatchObject(
          symbols.map(({ name: n, address, size, local }) => ({ name: n, address, size, local })),
        );
        expect(symbols.map((spec) => symbolsNamed(elf, spec.name))).toEqual(found);
        for (const [i, spec] of symbols.entries()) {
          expect(symbolAt(elf, i + 1)).toMatchObject({ name: spec.name, address: spec.address });
          const covering = symbols.filter(
            (other) => other.address <= spec.address && spec.address < other.address + other.size!,
          );
          expect(
            dataSymbolsAt(elf, spec.address)
              .map((each) => each.name)
              .sort(),
          ).toEqual(covering.map((each) => each.name).sort());
        }
        expect(symbolsNamed(elf, 'not_there_at_all')).toEqual([]);
        expect(symbolAt(elf, 999)).toBeUndefined();
      }),
      { numRuns: 40 },
    );
  });

  test('a value is read in the byte order of the file', () => {
    const bytes = new ByteWriter(kind.littleEndian).u32(0x3fa00000).u16(-3).result;
    const image = openImage(
      elfOf({
        ...kind,
        sections: [{ name: '.rodata', flags: allocated, address: 0x1000, bytes }],
        symbols: [
          { name: 'kp', address: 0x1000, size: 4 },
          { name: 'low', address: 0x1004, size: 2 },
        ],
      }),
      'a.elf',
    );
    expect(readCoefficient(image, { name: 'g', at: 'kp', format: 'float32' }).elements[0]).toMatchObject({
      value: 1.25,
      address: 0x1000,
    });
    expect(readCoefficient(image, { name: 'g', at: 'low', format: 'int16' }).elements[0].value).toBe(-3);
    expect(describeImage(image)).toMatchObject({
      bits: kind.bits,
      byteOrder: kind.littleEndian ? 'little' : 'big',
    });
  });

  test('a build id stands in its note, behind other notes', () => {
    const note = (owner: string, type: number, description: number[]) =>
      new ByteWriter(kind.littleEndian)
        .u32(owner.length + 1)
        .u32(description.length)
        .u32(type)
        .text(owner)
        .raw(new Uint8Array(-(owner.length + 1) & 3))
        .raw(description)
        .raw(new Uint8Array(-description.length & 3)).result;
    const notes = [
      ...note('stapsdt', 3, [1, 2, 3]),
      ...note('GNU', 1, [9, 9, 9, 9]),
      ...note('GNU', 3, [0xde, 0xad, 0xbe, 0xef, 0x01]),
    ];
    expect(
      buildIdOf(open({ sections: [{ name: '.note.gnu.build-id', type: 7, bytes: Uint8Array.from(notes) }] })),
    ).toBe('deadbeef01');
    expect(buildIdOf(open({ sections: [] }))).toBeUndefined();
    const cut = Uint8Array.from(notes.slice(0, 14));
    expect(() => buildIdOf(open({ sections: [{ name: '.note', type: 7, bytes: cut }] }))).toThrow(
      /the note “\.note” of “a\.elf” is damaged/,
    );
  });

  test('a debug link names a file and its checksum', () => {
    const link = new ByteWriter(kind.littleEndian).text('split.debug').u32(0x12345678).result;
    expect(debugLinkOf(open({ sections: [{ name: '.gnu_debuglink', bytes: link }] }))).toEqual({
      fileName: 'split.debug',
      checksum: 0x12345678,
    });
    expect(debugLinkOf(open({ sections: [] }))).toBeUndefined();
  });

  test('memory is there, cleared, or nowhere', () => {
    const elf = open({
      sections: [
        { name: '.data', flags: allocated, address: 0x1000, bytes: Uint8Array.from([1, 2, 3, 4]) },
        { name: '.bss', type: noBits, flags: allocated, address: 0x2000, size: 8 },
        { name: '.comment', address: 0, bytes: Uint8Array.from([9, 9, 9, 9]) },
      ],
      segments: [{ address: 0x1000, physical: 0x8000, bytes: Uint8Array.from([1, 2, 3, 4]) }],
    });
    expect([0x1000, 0x1003, 0x1004, 0x2007, 0x2008, 0].map((address) => isPlaced(elf, address))).toEqual([
      true,
      true,
      false,
      true,
      false,
      false,
    ]);
    expect([0x1000, 0x2000, 0x3000].map((address) => hasContents(elf, address))).toEqual([
      true,
      false,
      false,
    ]);
    expect([...readMemory(elf, 0x1001, 2, { what: 'x' })]).toEqual([2, 3]);
    expect([...readMemory(elf, 0x2000, 2, { what: 'x', startsAtZero: true })]).toEqual([0, 0]);
    expect(() => readMemory(elf, 0x2000, 2, { what: 'x' })).toThrow(
      /x at 0x2000 has no value in “a\.elf”: “\.bss” is cleared at start-up/,
    );
    expect(() => readMemory(elf, 0, 1, { what: 'x' })).toThrow(/lies in no section/);
    expect([0x1002, 0x2000].map((address) => physicalAddress(elf, address))).toEqual([0x8002, 0x2000]);
  });
});

test('more sections than the header can count are counted in the first row', () => {
  const bytes = elfOf({
    sections: [{ name: '.rodata', flags: allocated, address: 0x1000, bytes: Uint8Array.from([7]) }],
  });
  const view = new DataView(bytes.buffer);
  const rows = Number(view.getBigUint64(40, true));
  const [count, names] = [view.getUint16(60, true), view.getUint16(62, true)];
  view.setUint16(60, 0, true);
  view.setUint16(62, 0xffff, true);
  view.setBigUint64(rows + 32, BigInt(count), true);
  view.setUint32(rows + 40, names, true);
  const elf = openElf(bytes, 'a.elf');
  expect(elf.sections).toHaveLength(count);
  expect(sectionNamed(elf, '.rodata')?.size).toBe(1);
});

test('a local symbol belongs to the file row before it', () => {
  const symbols: SymbolSpec[] = [
    { name: 'first.c', address: 0, type: 4, local: true },
    { name: 'a', address: 0x1000, size: 1, local: true },
    { name: 'second.c', address: 0, type: 4, local: true },
    { name: 'b', address: 0x1001, size: 1, local: true },
    { name: 'c', address: 0x1002, size: 1 },
    { name: 'update', address: 0x1003, type: 2 },
    { name: 'imported', address: 0, section: 0 },
  ];
  const elf = openElf(
    elfOf({
      sections: [{ name: '.rodata', flags: allocated, address: 0x1000, bytes: new Uint8Array(8) }],
      symbols,
    }),
    'a.elf',
  );
  const [, , a, , b, c, update, imported] = allSymbols(elf);
  expect([a, b, c].map((symbol) => fileOfSymbol(elf, symbol))).toEqual(['first.c', 'second.c', undefined]);
  expect([a, update, imported].map(isData)).toEqual([true, false, false]);
});

test('compilers name themselves in the comment, each once', () => {
  const bytes = new ByteWriter().text('GCC: 12.2').text('clang 14').text('GCC: 12.2').result;
  expect(compilerComments(openElf(elfOf({ sections: [{ name: '.comment', bytes }] }), 'a.elf'))).toEqual([
    'GCC: 12.2',
    'clang 14',
  ]);
});

// The check value of CRC-32 in the catalogue of parametrised CRC algorithms (Greg Cook).
test('CRC-32 of the digits 1 to 9 is cbf43926', () => {
  expect(crc32(Buffer.from('123456789'))).toBe(0xcbf43926);
  expect(crc32(new Uint8Array())).toBe(0);
});

test('processors are called by their names, others by their number', () => {
  expect([40, 243, 62, 4711].map(machineName)).toEqual(['Arm', 'RISC-V', 'x86-64', 'machine 4711']);
});
