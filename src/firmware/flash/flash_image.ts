import { hex } from '../cursor.js';
import type { ElfFile } from '../elf/elf_file.js';
import { physicalAddress } from '../elf/memory.js';
import { FirmwareError, quoted } from '../failure.js';
import { bytesAt, type MemoryBlock } from './memory_blocks.js';

/** What is written into the target's flash: bytes at addresses, without names. */
export interface FlashContents {
  kind: 'intel_hex' | 's_record' | 'raw';
  name: string;
  blocks: MemoryBlock[];
}

/** The bytes at an address. @throws FirmwareError `no_contents` where the file has none */
export function readFlash(flash: FlashContents, address: number, size: number, what: string): Uint8Array {
  const bytes = bytesAt(flash.blocks, address, size);
  if (bytes) return bytes;
  const ranges = flash.blocks
    .slice(0, 4)
    .map((block) => `${hex(block.address)} to ${hex(block.address + block.bytes.length - 1)}`);
  const held =
    ranges.length === 0
      ? 'it is empty'
      : `it holds ${ranges.join(', ')}${flash.blocks.length > 4 ? ' and more' : ''}`;
  throw new FirmwareError(
    'no_contents',
    `${what}: ${quoted(flash.name)} has no ${size} bytes at ${hex(address)}; ${held}`,
  );
}

/**
 * Checks bytes of the ELF file which gave the names against what is flashed: that is what counts.
 * @throws FirmwareError `sources_disagree` where they differ
 */
export function checkFlashed(
  flash: FlashContents,
  elf: ElfFile,
  address: number,
  bytes: Uint8Array,
  what: string,
): void {
  const place = physicalAddress(elf, address);
  const flashed = readFlash(flash, place, bytes.length, what);
  const differs = bytes.findIndex((byte, at) => byte !== flashed[at]);
  if (differs < 0) return;
  const from = differs - (differs % 4);
  const text = (some: Uint8Array) => Buffer.from(some.subarray(from, from + 16)).toString('hex');
  throw new FirmwareError(
    'sources_disagree',
    `${what}: ${quoted(flash.name)} holds the bytes ${text(flashed)} at ${hex(place + from)}, ${quoted(elf.name)} ${text(bytes)}; they are not of the same build`,
  );
}
