import { Cursor, hex } from '../cursor.js';
import { FirmwareError, quoted } from '../failure.js';

/** A row of the section table. Addresses are where the program runs; a relocatable object gets made-up ones. */
export interface ElfSection {
  index: number;
  name: string;
  type: number;
  flags: number;
  address: number;
  offset: number;
  size: number;
  link: number;
  info: number;
  alignment: number;
}

/** A row of the program table: what the loader puts where. */
export interface ElfSegment {
  type: number;
  offset: number;
  virtualAddress: number;
  physicalAddress: number;
  fileSize: number;
  memorySize: number;
}

/** The tables of an ELF file; contents are read when they are asked for. */
export interface ElfFile {
  name: string;
  bytes: Uint8Array;
  /** Width of an address. */
  bits: 32 | 64;
  littleEndian: boolean;
  /** The number in `e_machine`. */
  machine: number;
  /** An object that is not linked yet: addresses have no meaning on the target. */
  relocatable: boolean;
  sections: ElfSection[];
  segments: ElfSegment[];
}

/** Section types and flags of the ELF specification (System V ABI, chapter 4). */
export const sectionType = {
  symbols: 2,
  strings: 3,
  rela: 4,
  note: 7,
  noBits: 8,
  rel: 9,
  dynamicSymbols: 11,
} as const;
export const sectionFlag = { allocated: 0x2, threadLocal: 0x400, compressed: 0x800 } as const;

const fileType = { relocatable: 1, executable: 2, shared: 3 } as const;

/** Whether the bytes begin as an ELF file does. */
export function looksLikeElf(bytes: Uint8Array): boolean {
  return (
    bytes.length >= 4 && bytes[0] === 0x7f && bytes[1] === 0x45 && bytes[2] === 0x4c && bytes[3] === 0x46
  );
}

/** Reads header, section table and program table. @throws FirmwareError when they are damaged or of an unknown kind */
export function openElf(bytes: Uint8Array, name: string): ElfFile {
  if (!looksLikeElf(bytes)) {
    throw new FirmwareError(
      'not_an_image',
      `${quoted(name)} is not an ELF file: its first bytes are not 7f 45 4c 46`,
    );
  }
  const [wordClass, byteOrder] = [bytes[4], bytes[5]];
  if (wordClass !== 1 && wordClass !== 2) {
    throw new FirmwareError(
      'malformed_image',
      `${quoted(name)}: ELF class ${wordClass}, expected 1 (32 bit) or 2 (64 bit)`,
    );
  }
  if (byteOrder !== 1 && byteOrder !== 2) {
    throw new FirmwareError(
      'malformed_image',
      `${quoted(name)}: ELF byte order ${byteOrder}, expected 1 (little) or 2 (big)`,
    );
  }
  const littleEndian = byteOrder === 1;
  const wide = wordClass === 2;
  const cursor = new Cursor(bytes, littleEndian, `the ELF header of ${quoted(name)}`, 16);
  const header = readHeader(cursor, wide);
  if (!(Object.values(fileType) as number[]).includes(header.type)) {
    throw new FirmwareError(
      'unsupported',
      `${quoted(name)}: ELF type ${header.type}; an executable, shared or relocatable file is expected`,
    );
  }
  const elf: ElfFile = {
    name,
    bytes,
    bits: wide ? 64 : 32,
    littleEndian,
    machine: header.machine,
    relocatable: header.type === fileType.relocatable,
    sections: [],
    segments: [],
  };
  elf.sections = readSections(elf, header);
  elf.segments = readSegments(elf, header);
  if (elf.relocatable) placeSections(elf.sections);
  return elf;
}

interface Header {
  type: number;
  machine: number;
  segmentsAt: number;
  segmentSize: number;
  segmentCount: number;
  sectionsAt: number;
  sectionSize: number;
  sectionCount: number;
  namesIndex: number;
}

function readHeader(cursor: Cursor, wide: boolean): Header {
  const word = wide ? 8 : 4;
  const type = cursor.u16();
  const machine = cursor.u16();
  cursor.skip(4 + word);
  const segmentsAt = cursor.length(word);
  const sectionsAt = cursor.length(word);
  cursor.skip(6);
  const segmentSize = cursor.u16();
  const segmentCount = cursor.u16();
  const sectionSize = cursor.u16();
  const sectionCount = cursor.u16();
  const namesIndex = cursor.u16();
  return {
    type,
    machine,
    segmentsAt,
    segmentSize,
    segmentCount,
    sectionsAt,
    sectionSize,
    sectionCount,
    namesIndex,
  };
}

type RawSection = ElfSection & { nameOffset: number };

function readSections(elf: ElfFile, header: Header): ElfSection[] {
  if (header.sectionsAt === 0) return [];
  const region = `the section table of ${quoted(elf.name)}`;
  const least = elf.bits === 64 ? 64 : 40;
  const cursor = new Cursor(elf.bytes, elf.littleEndian, region);
  if (header.sectionSize < least)
    throw cursor.failure(`rows of ${header.sectionSize} bytes, expected ${least}`);
  const row = (index: number) => {
    cursor.moveTo(header.sectionsAt + index * header.sectionSize);
    return readSection(cursor, index, elf.bits === 64);
  };
  // More than 0xff00 sections: the real numbers stand in the first row.
  const first = row(0);
  const count = header.sectionCount === 0 ? first.size : header.sectionCount;
  const namesIndex = header.namesIndex === 0xffff ? first.link : header.namesIndex;
  if (count > elf.bytes.length / header.sectionSize)
    throw cursor.failure(`${count} sections do not fit the file`);
  const sections = Array.from({ length: count }, (_, index) => row(index));
  const names = sections[namesIndex];
  if (!names || names.type !== sectionType.strings) return sections;
  const texts = new Cursor(
    fileRange(elf, names),
    elf.littleEndian,
    `the section names of ${quoted(elf.name)}`,
  );
  for (const section of sections) section.name = texts.moveTo(section.nameOffset).text();
  return sections;
}

function readSection(cursor: Cursor, index: number, wide: boolean): RawSection {
  const word = wide ? 8 : 4;
  return {
    index,
    name: '',
    nameOffset: cursor.u32(),
    type: cursor.u32(),
    flags: cursor.unsigned(word),
    address: cursor.unsigned(word),
    offset: cursor.length(word),
    size: cursor.length(word),
    link: cursor.u32(),
    info: cursor.u32(),
    alignment: cursor.unsigned(word),
  };
}

function readSegments(elf: ElfFile, header: Header): ElfSegment[] {
  if (header.segmentsAt === 0) return [];
  const wide = elf.bits === 64;
  const cursor = new Cursor(elf.bytes, elf.littleEndian, `the program table of ${quoted(elf.name)}`);
  if (header.segmentCount > 0 && header.segmentSize < (wide ? 56 : 32)) {
    throw cursor.failure(`rows of ${header.segmentSize} bytes, expected ${wide ? 56 : 32}`);
  }
  return Array.from({ length: header.segmentCount }, (_, index) => {
    cursor.moveTo(header.segmentsAt + index * header.segmentSize);
    const type = cursor.u32();
    if (wide) cursor.skip(4);
    const word = wide ? 8 : 4;
    return {
      type,
      offset: cursor.length(word),
      virtualAddress: cursor.unsigned(word),
      physicalAddress: cursor.unsigned(word),
      fileSize: cursor.length(word),
      memorySize: cursor.length(word),
    };
  });
}

/** Sections of an unlinked object all start at 0: apart from each other, an address tells the section again. */
function placeSections(sections: ElfSection[]): void {
  let next = 0x10000;
  for (const section of sections) {
    if (!(section.flags & sectionFlag.allocated)) continue;
    const alignment = Math.min(Math.max(section.alignment, 16), 0x10000);
    section.address = Math.ceil(next / alignment) * alignment;
    next = section.address + section.size + 0x100;
  }
}

/** The bytes of a section as they stand in the file. @throws FirmwareError when it reaches past the end */
export function fileRange(elf: ElfFile, section: ElfSection): Uint8Array {
  const end = section.offset + section.size;
  if (end > elf.bytes.length) {
    throw new FirmwareError(
      'malformed_image',
      `${quoted(elf.name)}: section ${quoted(section.name)} ends at ${hex(end)}, past the end of the file at ${hex(elf.bytes.length)}`,
    );
  }
  return elf.bytes.subarray(section.offset, end);
}
