import { hex } from '../cursor.js';
import { FirmwareError, quoted } from '../failure.js';
import { contentsOf } from './contents.js';
import { type ElfFile, type ElfSection, type ElfSegment, sectionFlag, sectionType } from './elf_file.js';
import { isRelocated } from './relocate.js';

const loadedSegment = 1;

/** How to read memory: what is wanted, for the error text, and whether memory that starts at zero may be read. */
export interface ReadOptions {
  what: string;
  /** The start-up code clears this memory, and the spec says that nothing else sets it. */
  startsAtZero?: boolean;
  /** The bytes are an address, which may well be one that the linker is still to set. */
  isAddress?: boolean;
}

/** Whether the address lies in memory that the image places. */
export function isPlaced(elf: ElfFile, address: number): boolean {
  return sectionsAt(elf, address).length > 0 || segmentAt(elf, address) !== undefined;
}

/**
 * The bytes which stand at an address before the program runs: for initialised RAM those of the file, wherever it is loaded.
 * @throws FirmwareError `no_contents` for memory without bytes in the file, `needs_relocation` in an unlinked object
 */
export function readMemory(elf: ElfFile, address: number, size: number, options: ReadOptions): Uint8Array {
  const sections = sectionsAt(elf, address);
  const withContents = sections.filter((s) => s.type !== sectionType.noBits);
  if (withContents.length > 0) return readSections(elf, withContents, address, size, options);
  if (sections.length > 0) return zeroes(elf, sections[0].name, address, size, options);
  const segment = segmentAt(elf, address);
  if (segment) return readSegment(elf, segment, address, size, options);
  throw new FirmwareError(
    'malformed_image',
    `${options.what}: its address ${hex(address)} lies in no section of ${quoted(elf.name)}`,
  );
}

/** Whether the file has bytes for the address, as it has not for memory that is cleared at start-up. */
export function hasContents(elf: ElfFile, address: number): boolean {
  const segment = segmentAt(elf, address);
  if (segment) return address - segment.virtualAddress < segment.fileSize;
  return sectionsAt(elf, address).some((section) => section.type !== sectionType.noBits);
}

function sectionsAt(elf: ElfFile, address: number): ElfSection[] {
  return elf.sections.filter(
    (s) =>
      (s.flags & sectionFlag.allocated) !== 0 &&
      (s.flags & sectionFlag.threadLocal) === 0 &&
      address >= s.address &&
      address < s.address + s.size,
  );
}

function segmentAt(elf: ElfFile, address: number): ElfSegment | undefined {
  if (elf.sections.some((s) => s.flags & sectionFlag.allocated)) return undefined;
  return elf.segments.find(
    (s) =>
      s.type === loadedSegment && address >= s.virtualAddress && address < s.virtualAddress + s.memorySize,
  );
}

function readSections(
  elf: ElfFile,
  sections: ElfSection[],
  address: number,
  size: number,
  options: ReadOptions,
) {
  const ranges = sections.map((section) => readSection(elf, section, address, size, options));
  const other = ranges.findIndex((range) => Buffer.compare(range, ranges[0]) !== 0);
  if (other > 0) {
    throw new FirmwareError(
      'sources_disagree',
      `${options.what}: sections ${quoted(sections[0].name)} and ${quoted(sections[other].name)} of ${quoted(elf.name)} both lie at ${hex(address)} and differ there`,
    );
  }
  return ranges[0];
}

function readSection(elf: ElfFile, section: ElfSection, address: number, size: number, options: ReadOptions) {
  const offset = address - section.address;
  const contents = contentsOf(elf, section);
  if (offset + size > contents.length) {
    throw new FirmwareError(
      'malformed_image',
      `${options.what}: ${size} bytes at ${hex(address)} reach past the end of section ${quoted(section.name)} of ${quoted(elf.name)}`,
    );
  }
  if (elf.relocatable && !options.isAddress) refuseRelocated(elf, section, offset, size, options);
  return contents.subarray(offset, offset + size);
}

function refuseRelocated(
  elf: ElfFile,
  section: ElfSection,
  offset: number,
  size: number,
  options: ReadOptions,
): void {
  if (!isRelocated(elf, section, offset, size)) return;
  throw new FirmwareError(
    'needs_relocation',
    `${options.what}: its bytes in ${quoted(elf.name)} are set by the linker only; give the linked image`,
  );
}

function readSegment(elf: ElfFile, segment: ElfSegment, address: number, size: number, options: ReadOptions) {
  const offset = address - segment.virtualAddress;
  if (offset >= segment.fileSize) return zeroes(elf, 'a segment', address, size, options);
  const start = segment.offset + offset;
  if (offset + size > segment.fileSize || start + size > elf.bytes.length) {
    throw new FirmwareError(
      'malformed_image',
      `${options.what}: ${size} bytes at ${hex(address)} reach past the segment's end in ${quoted(elf.name)}`,
    );
  }
  return elf.bytes.subarray(start, start + size);
}

function zeroes(
  elf: ElfFile,
  place: string,
  address: number,
  size: number,
  options: ReadOptions,
): Uint8Array {
  if (options.startsAtZero && size <= 1 << 24) return new Uint8Array(size);
  throw new FirmwareError(
    'no_contents',
    `${options.what} at ${hex(address)} has no value in ${quoted(elf.name)}: ${quoted(place)} is cleared at start-up and set by the running program; ` +
      'initialise it in the source (const), or say starts_at_zero: true',
  );
}

/** Where a loader puts the byte which the running program has at an address: elsewhere for initialised RAM. */
export function physicalAddress(elf: ElfFile, address: number): number {
  const segment = elf.segments.find(
    (s) => s.type === loadedSegment && address >= s.virtualAddress && address < s.virtualAddress + s.fileSize,
  );
  return segment ? segment.physicalAddress + (address - segment.virtualAddress) : address;
}
