import { Cursor } from '../cursor.js';
import { quoted } from '../failure.js';
import { contentsOf, sectionNamed } from './contents.js';
import type { ElfFile } from './elf_file.js';

/** Names the file which holds the debug information that was split off. */
export interface DebugLink {
  fileName: string;
  /** CRC-32 of that file. */
  checksum: number;
}

/** What `.gnu_debuglink` says, undefined when there is none (objcopy --add-gnu-debuglink). */
export function debugLinkOf(elf: ElfFile): DebugLink | undefined {
  const section = sectionNamed(elf, '.gnu_debuglink');
  if (!section) return undefined;
  const cursor = new Cursor(
    contentsOf(elf, section),
    elf.littleEndian,
    `.gnu_debuglink of ${quoted(elf.name)}`,
  );
  const fileName = cursor.text();
  cursor.skip(-cursor.position & 3);
  return { fileName, checksum: cursor.u32() };
}

const table = Uint32Array.from({ length: 256 }, (_, byte) => {
  let remainder = byte;
  for (let bit = 0; bit < 8; bit++)
    remainder = remainder & 1 ? (remainder >>> 1) ^ 0xedb88320 : remainder >>> 1;
  return remainder;
});

/** CRC-32 of ISO 3309, as debug links use it (reflected polynomial 0xedb88320). */
export function crc32(bytes: Uint8Array): number {
  let remainder = 0xffffffff;
  for (const byte of bytes) remainder = table[(remainder ^ byte) & 0xff] ^ (remainder >>> 8);
  return ~remainder >>> 0;
}
