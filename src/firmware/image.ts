import { DebugInformation } from './dwarf/debug_information.js';
import { type ElfFile, looksLikeElf, openElf, sectionType } from './elf/elf_file.js';
import { FirmwareError, quoted } from './failure.js';
import type { FlashContents } from './flash/flash_image.js';
import { readIntelHex } from './flash/intel_hex.js';
import { readSRecords } from './flash/s_record.js';
import type { ValuesImage } from './values/values_image.js';

/** A built image, opened: what coefficients are read from. */
export type FirmwareImage = ElfImage | FlashImage | ValuesImage;

/** An ELF file with the debug information that belongs to it. */
export interface ElfImage {
  kind: 'elf';
  name: string;
  bytes: Uint8Array;
  elf: ElfFile;
  /** The file whose symbol table counts: the debug file's where the image itself is stripped. */
  symbolTable: ElfFile;
  debug: DebugInformation;
  /** The file that is flashed, where this one gives the names only: whatever is read must stand there too. */
  flash?: FlashContents;
}

/** A file of bytes at addresses: Intel HEX, S-records or a raw binary. */
export interface FlashImage {
  kind: FlashContents['kind'];
  name: string;
  bytes: Uint8Array;
  contents: FlashContents;
  littleEndian: boolean;
  /** The ELF file of the same build, for names and types. */
  symbols: ElfImage | undefined;
}

/** How to open what its bytes alone do not explain. */
export interface OpenOptions {
  /** Address of the first byte of a raw binary; bytes of no known format are refused without it. */
  baseAddress?: number;
  /** Byte order of a target whose image does not state it; little by default. */
  byteOrder?: 'little' | 'big';
  /** ELF file of the same build, which gives names and types to Intel HEX, S-records or a raw binary. */
  symbols?: FirmwareImage;
  /** ELF file into which the debug information was split off (`objcopy --only-keep-debug`). */
  debugFile?: FirmwareImage;
}

/**
 * Opens an image by what its bytes are; nothing but the tables is read yet.
 * @param name what messages call it, mostly its path as the spec writes it
 * @throws FirmwareError `not_an_image`, `malformed_image` or `unsupported`
 */
export function openImage(bytes: Uint8Array, name: string, options: OpenOptions = {}): FirmwareImage {
  if (bytes.length === 0) throw new FirmwareError('not_an_image', `${quoted(name)} is empty`);
  if (options.baseAddress !== undefined) {
    return flashImage(
      { kind: 'raw', name, blocks: [{ address: options.baseAddress, bytes }] },
      bytes,
      options,
    );
  }
  if (looksLikeElf(bytes)) return elfImage(bytes, name, options);
  const start = Buffer.from(bytes.subarray(0, 12)).toString('latin1').trimStart();
  if (/^:[0-9A-Fa-f]{8}/.test(start))
    return flashImage({ kind: 'intel_hex', name, blocks: readIntelHex(bytes, name) }, bytes, options);
  if (/^S\d[0-9A-Fa-f]{4}/.test(start))
    return flashImage({ kind: 's_record', name, blocks: readSRecords(bytes, name) }, bytes, options);
  throw notAnImage(bytes, name);
}

function elfImage(bytes: Uint8Array, name: string, options: OpenOptions): ElfImage {
  const elf = openElf(bytes, name);
  const debug = options.debugFile === undefined ? undefined : elfOf(options.debugFile, 'the debug file').elf;
  const symbolTable =
    debug && !elf.sections.some((section) => section.type === sectionType.symbols) ? debug : elf;
  return { kind: 'elf', name, bytes, elf, symbolTable, debug: new DebugInformation(debug ?? elf) };
}

function flashImage(contents: FlashContents, bytes: Uint8Array, options: OpenOptions): FlashImage {
  const elf = options.symbols && elfOf(options.symbols, 'the file of symbols');
  const littleEndian = elf ? elf.elf.littleEndian : options.byteOrder !== 'big';
  const symbols = elf && { ...elf, flash: contents };
  return { kind: contents.kind, name: contents.name, bytes, contents, littleEndian, symbols };
}

function elfOf(image: FirmwareImage, what: string): ElfImage {
  if (image.kind === 'elf') return image;
  throw new FirmwareError('not_an_image', `${what} ${quoted(image.name)} must be an ELF file`);
}

function notAnImage(bytes: Uint8Array, name: string): FirmwareError {
  const first = [...bytes.subarray(0, 4)].map((byte) => byte.toString(16).padStart(2, '0')).join(' ');
  return new FirmwareError(
    'not_an_image',
    `${quoted(name)} is not an ELF file (7f 45 4c 46), Intel HEX or S-records: it begins with ${first}; a raw binary needs its base address`,
  );
}
