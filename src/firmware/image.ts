import { DebugInformation } from './dwarf/debug_information.js';
import { type ElfFile, looksLikeElf, openElf } from './elf/elf_file.js';
import { FirmwareError, quoted } from './failure.js';

/** A built image, opened: what coefficients are read from. */
export type FirmwareImage = ElfImage;

/** An ELF file with the debug information that belongs to it. */
export interface ElfImage {
  kind: 'elf';
  name: string;
  bytes: Uint8Array;
  elf: ElfFile;
  debug: DebugInformation;
}

/**
 * Opens an image by what its bytes are; nothing but the tables is read yet.
 * @param name what messages call it, mostly its path as the spec writes it
 * @throws FirmwareError `not_an_image`, `malformed_image` or `unsupported`
 */
export function openImage(bytes: Uint8Array, name: string): FirmwareImage {
  if (!looksLikeElf(bytes)) throw notAnImage(bytes, name);
  const elf = openElf(bytes, name);
  return { kind: 'elf', name, bytes, elf, debug: new DebugInformation(elf) };
}

function notAnImage(bytes: Uint8Array, name: string): FirmwareError {
  if (bytes.length === 0) return new FirmwareError('not_an_image', `${quoted(name)} is empty`);
  const first = [...bytes.subarray(0, 4)].map((byte) => byte.toString(16).padStart(2, '0')).join(' ');
  return new FirmwareError(
    'not_an_image',
    `${quoted(name)} is not an ELF file: it begins with ${first}, expected 7f 45 4c 46`,
  );
}
