import fc from 'fast-check';
import { describe, expect, test } from 'vitest';
import { at, encoding, form, tag } from '../../src/firmware/dwarf/codes.js';
import { readIntelHex } from '../../src/firmware/flash/intel_hex.js';
import { bytesAt, type MemoryBlock } from '../../src/firmware/flash/memory_blocks.js';
import { readSRecords } from '../../src/firmware/flash/s_record.js';
import { describeImage, FirmwareError, openImage, readCoefficient } from '../../src/firmware/index.js';
import { ByteWriter } from './byte_writer.js';
import { baseType, debugSections, variable } from './dwarf_builder.js';
import { allocated, elfOf } from './elf_builder.js';

/** What is flashed is read exactly, every checksum is verified, and it counts more than the ELF file of the same build. */
const text = (lines: string[], ending = '\n') => Buffer.from(lines.join(ending) + ending);
const hexByte = (value: number) => (value & 0xff).toString(16).toUpperCase().padStart(2, '0');

function hexRecord(type: number, address: number, data: ArrayLike<number>): string {
  const bytes = [data.length, address >> 8, address & 0xff, type, ...Array.from(data)];
  const sum = bytes.reduce((total, byte) => total + (byte & 0xff), 0);
  return `:${[...bytes, -sum].map(hexByte).join('')}`;
}

function hexFile(blocks: MemoryBlock[]): Uint8Array {
  const lines = blocks.flatMap(({ address, bytes }) => [
    hexRecord(4, 0, [address >>> 24, (address >>> 16) & 0xff]),
    hexRecord(0, address & 0xffff, bytes),
  ]);
  return text([...lines, ':00000001FF']);
}

function sRecord(type: number, address: number, data: ArrayLike<number>): string {
  const width = { 0: 2, 1: 2, 2: 3, 3: 4, 5: 2, 7: 4, 8: 3, 9: 2 }[type] ?? 2;
  const bytes = [width + data.length + 1];
  for (let i = width - 1; i >= 0; i--) bytes.push((address >>> (8 * i)) & 0xff);
  bytes.push(...Array.from(data));
  const sum = bytes.reduce((total, byte) => total + byte, 0);
  return `S${type}${[...bytes, ~sum].map(hexByte).join('')}`;
}

/** Blocks far enough apart not to touch, and within one range of 64 KiB each. */
const anyBlocks = fc
  .array(fc.tuple(fc.nat(0xff00), fc.uint8Array({ minLength: 1, maxLength: 200 })), {
    minLength: 1,
    maxLength: 6,
  })
  .map((list) => list.map(([low, bytes], i): MemoryBlock => ({ address: (i + 1) * 0x10000 + low, bytes })));

describe('Intel HEX', () => {
  test('blocks come back as they were written', () => {
    fc.assert(
      fc.property(anyBlocks, (blocks) => {
        const read = readIntelHex(hexFile(blocks), 'a.hex');
        for (const block of blocks)
          expect(bytesAt(read, block.address, block.bytes.length)).toEqual(Buffer.from(block.bytes));
      }),
    );
  });

  // The example of Intel's specification, revision A, 1988, as it is quoted everywhere.
  test('the usual example, with either end of line', () => {
    const lines = [
      ':10010000214601360121470136007EFE09D2190140',
      ':100110002146017E17C20001FF5F16002148011928',
      ':00000001FF',
    ];
    for (const ending of ['\n', '\r\n']) {
      const [block, ...others] = readIntelHex(text(lines, ending), 'a.hex');
      expect(others).toEqual([]);
      expect(block.address).toBe(0x100);
      expect(Buffer.from(block.bytes).toString('hex')).toBe(
        '214601360121470136007efe09d219012146017e17c20001ff5f160021480119',
      );
    }
  });

  test('segment addresses count sixteen bytes', () => {
    const [block] = readIntelHex(
      text([hexRecord(2, 0, [0x12, 0x34]), hexRecord(0, 5, [9]), ':00000001FF']),
      'a.hex',
    );
    expect(block.address).toBe(0x12345);
  });

  test.each([
    ['a wrong checksum', [':0300300002337A1E', ':0300300002337A1F'], /line 2: the checksum is wrong/],
    [
      'a wrong length',
      [':0400300002337A1D', ':00000001FF'],
      /line 1: the record has 3 bytes of data, but claims 4/,
    ],
    ['an unknown type', [hexRecord(9, 0, []), ':00000001FF'], /line 1: a record of type 9/],
    ['no end', [':0300300002337A1E'], /the end record is missing: the file is cut off/],
    [
      'something behind the end',
      [':00000001FF', ':0300300002337A1E'],
      /line 2: a record behind the end record/,
    ],
    ['no record', [':00000001FF', 'hello'], /line 2: “hello” is no record/],
    ['an odd digit', [':00000001F'], /is no record/],
    ['letters that are no digits', [':0000000GFF'], /is no record/],
    [
      'different bytes at one address',
      [hexRecord(0, 16, [1, 2, 3]), hexRecord(0, 18, [4]), ':00000001FF'],
      /puts different bytes at 0x12 twice/,
    ],
  ])('%s is an error with its line', (_, lines, message) => {
    expect(() => readIntelHex(text(lines), 'a.hex')).toThrow(message);
  });

  test('the same bytes twice are no error', () => {
    const blocks = readIntelHex(
      text([hexRecord(0, 16, [1, 2, 3]), hexRecord(0, 17, [2, 3, 4]), ':00000001FF']),
      'a.hex',
    );
    expect(bytesAt(blocks, 16, 4)).toEqual(Buffer.from([1, 2, 3, 4]));
  });
});

describe('S-records', () => {
  test('blocks come back as they were written, in each width of address', () => {
    fc.assert(
      fc.property(anyBlocks, fc.constantFrom(2, 3), (blocks, type) => {
        const lines = blocks.map((block) => sRecord(type, block.address, block.bytes));
        const read = readSRecords(
          text([sRecord(0, 0, [65]), ...lines, sRecord(5, lines.length, []), 'S9030000FC']),
          'a.srec',
        );
        for (const block of blocks)
          expect(bytesAt(read, block.address, block.bytes.length)).toEqual(Buffer.from(block.bytes));
      }),
    );
  });

  // The example of Motorola's M68000 family manual, appendix on the S-record format (value from memory).
  test('the usual example', () => {
    const lines = [
      'S00F000068656C6C6F202020202000003C',
      'S11F00007C0802A6900100049421FFF07C6C1B787C8C23783C6000003863000026',
      'S5030001FB',
      'S9030000FC',
    ];
    const [block] = readSRecords(text(lines), 'a.srec');
    expect([block.address, block.bytes.length, block.bytes[0]]).toEqual([0, 28, 0x7c]);
  });

  test.each([
    ['a wrong checksum', ['S1050000010203'], /line 1: the checksum is wrong/],
    ['a wrong count of bytes', [`${sRecord(1, 0, [1, 2]).slice(0, -2)}`], /checksum is wrong|claims/],
    [
      'a wrong count of records',
      [sRecord(1, 0, [1]), sRecord(5, 7, [])],
      /line 2: 7 data records are announced, 1 were there/,
    ],
    ['a reserved type', ['S4030000FC'], /records of type S4 are reserved/],
    ['no end', [sRecord(1, 0, [1])], /the end record \(S7, S8 or S9\) is missing/],
    [
      'something behind the end',
      ['S9030000FC', sRecord(1, 0, [1])],
      /line 2: a record behind the end record/,
    ],
  ])('%s is an error', (_, lines, message) => {
    expect(() => readSRecords(text(lines), 'a.srec')).toThrow(message);
  });
});

describe('coefficients of what is flashed', () => {
  const values = new ByteWriter().u32(0x3fa00000).u16(0x4000).u16(0xe000).u32(0xffffffff).result;
  const image = openImage(hexFile([{ address: 0x0801f000, bytes: values }]), 'a.hex');
  const asked = { name: 'gain', at: 'gain' };

  test('address, format and count say what to read', () => {
    expect(readCoefficient(image, { ...asked, address: 0x0801f000, format: 'float32' })).toEqual({
      path: 'gain',
      elements: [{ value: 1.25, stored: '0x3fa00000', address: 0x0801f000, quantum: 2 ** -23 }],
      shape: [],
      type: 'float32',
      format: { kind: 'float', bits: 32 },
      declaredAt: undefined,
    });
    const table = readCoefficient(image, { ...asked, address: 0x0801f004, format: 'Q2.14', count: 2 });
    expect(table).toMatchObject({
      shape: [2],
      type: 'Q2.14[2]',
      elements: [{ value: 1 }, { value: -0.5, address: 0x0801f006 }],
    });
  });

  test('big-endian targets are told so', () => {
    const big = openImage(hexFile([{ address: 0, bytes: Uint8Array.from([0x3f, 0xa0, 0, 0]) }]), 'a.hex', {
      byteOrder: 'big',
    });
    expect(readCoefficient(big, { ...asked, address: 0, format: 'float32' }).elements[0].value).toBe(1.25);
    expect(describeImage(big)).toMatchObject({ kind: 'intel_hex', byteOrder: 'big', machine: undefined });
  });

  test('flash which nobody wrote is pointed out', () => {
    expect(
      readCoefficient(image, { ...asked, address: 0x0801f008, format: 'int32' }).elements[0],
    ).toMatchObject({ value: -1, remark: 'erased' });
    expect(
      readCoefficient(image, { ...asked, address: 0x0801f008, format: 'float32' }).elements[0].remark,
    ).toBe('erased');
  });

  test.each([
    [{ address: 0x0801f000 }, 'needs_format', /give its format too/],
    [
      { address: 0x0801f00a, format: 'float32' },
      'no_contents',
      /has no 4 bytes at 0x801f00a; it holds 0x801f000 to 0x801f00b/,
    ],
    [{ address: -4, format: 'int8' }, 'bad_request', /-4 is no address/],
    [{ address: 0x0801f000, format: 'int8', count: 0 }, 'bad_request', /a count of 0/],
    [
      {},
      'bad_request',
      /has no names: give the ELF file of the same build as symbols, or address and format/,
    ],
  ])('%j is an error', (request, code, message) => {
    try {
      readCoefficient(image, { ...asked, ...request });
      expect.unreachable();
    } catch (error) {
      expect(error).toBeInstanceOf(FirmwareError);
      expect(error).toMatchObject({ code, requestName: 'gain', message: expect.stringMatching(message) });
    }
  });

  test('a raw binary needs its base address', () => {
    expect(() => openImage(values, 'a.bin')).toThrow(/a raw binary needs its base address/);
    const raw = openImage(values, 'a.bin', { baseAddress: 0x2000 });
    expect(readCoefficient(raw, { ...asked, address: 0x2000, format: 'float32' }).elements[0].value).toBe(
      1.25,
    );
    expect(() => openImage(new Uint8Array(), 'a.bin', { baseAddress: 0 })).toThrow(/is empty/);
  });
});

describe('names from an ELF file beside what is flashed', () => {
  const contents = new ByteWriter().u32(0x3fa00000).u32(0x40000000).result;
  const bss = { name: '.bss', type: 8, flags: allocated, address: 0x2000_1000, size: 8 };
  const constant = {
    tag: tag.variable,
    attributes: [
      [at.name, form.string, 'folded'],
      [at.type, form.ref4, { to: 'float' }],
      [at.constValue, form.data4, 0x3fa00000],
    ] as [number, number, number | string | { to: string }][],
  };
  const elf = openImage(
    elfOf({
      sections: [
        { name: '.data', flags: allocated, address: 0x2000_0000, bytes: contents },
        bss,
        ...debugSections({
          entries: [
            baseType('float', 'float', 4, encoding.float),
            variable('kp', 'float', 0x2000_0000),
            variable('ki', 'float', 0x2000_0004),
            variable('cleared', 'float', 0x2000_1000),
            constant,
          ],
        }),
      ],
      // Initialised RAM is loaded elsewhere: the start-up code copies it from flash.
      segments: [{ address: 0x2000_0000, physical: 0x0800_4000, bytes: contents }],
    }),
    'a.elf',
  );
  const flashed = (bytes: Uint8Array) =>
    openImage(hexFile([{ address: 0x0800_4000, bytes }]), 'a.hex', { symbols: elf });

  test('initialised RAM is read where it is loaded, and reported where the program has it', () => {
    const { elements, type } = readCoefficient(flashed(contents), { name: 'gain', at: 'kp' });
    expect(elements[0]).toMatchObject({ value: 1.25, address: 0x2000_0000 });
    expect(type).toBe('float');
  });

  test('a difference is an error which shows both', () => {
    const other = contents.slice();
    other[7] = 0x41;
    expect(readCoefficient(flashed(other), { name: 'gain', at: 'kp' }).elements[0].value).toBe(1.25);
    expect(() => readCoefficient(flashed(other), { name: 'gain', at: 'ki' })).toThrow(
      /“a\.hex” holds the bytes 00000041 at 0x8004004, “a\.elf” 00000040; they are not of the same build/,
    );
  });

  test('what the file lacks is an error', () => {
    expect(() => readCoefficient(flashed(contents.slice(0, 4)), { name: 'gain', at: 'ki' })).toThrow(
      /has no 4 bytes at 0x8004004/,
    );
  });

  test('a constant without an address cannot be compared', () => {
    expect(() => readCoefficient(flashed(contents), { name: 'gain', at: 'folded' })).toThrow(
      /has no address in “a\.elf”.*cannot be compared/,
    );
  });

  test('cleared memory is nowhere in flash', () => {
    expect(
      readCoefficient(flashed(contents), { name: 'gain', at: 'cleared', startsAtZero: true }).elements[0]
        .value,
    ).toBe(0);
  });

  test('the file of names must be an ELF file', () => {
    const hex = openImage(hexFile([{ address: 0, bytes: contents }]), 'b.hex');
    expect(() => openImage(contents, 'a.bin', { baseAddress: 0, symbols: hex })).toThrow(
      /the file of symbols “b\.hex” must be an ELF file/,
    );
  });
});
