import { createRequire } from 'node:module';
import { Cursor } from '../cursor.js';
import { FirmwareError, quoted } from '../failure.js';
import { type ElfFile, type ElfSection, fileRange, sectionFlag, sectionType } from './elf_file.js';
import { relocated } from './relocate.js';

/** Deflate cannot expand more than about 1032-fold (RFC 1951): a larger claim is a decompression bomb. */
const mostExpansion = 1032;
/** Zstandard can expand more; debug information never does. */
const mostBytes = 2 ** 30;

const kept = new WeakMap<ElfFile, Map<ElfSection, Uint8Array>>();
const load = createRequire(import.meta.url);

/** The section of this name; debug sections also under the old compressed name `.zdebug_…`. */
export function sectionNamed(elf: ElfFile, name: string): ElfSection | undefined {
  const old = name.startsWith('.debug_') ? `.z${name.slice(1)}` : undefined;
  return elf.sections.find((s) => s.name === name || (old !== undefined && s.name === old));
}

/**
 * A section's contents, decompressed, and with relocations applied in an unlinked object. Empty for a section which
 * has none in the file.
 * @throws FirmwareError when damaged, or compressed in a way that this Node does not offer
 */
export function contentsOf(elf: ElfFile, section: ElfSection): Uint8Array {
  let ofFile = kept.get(elf);
  if (!ofFile) {
    ofFile = new Map();
    kept.set(elf, ofFile);
  }
  let contents = ofFile.get(section);
  if (!contents) {
    contents = section.type === sectionType.noBits ? new Uint8Array() : expanded(elf, section);
    if (elf.relocatable) contents = relocated(elf, section, contents);
    ofFile.set(section, contents);
  }
  return contents;
}

function expanded(elf: ElfFile, section: ElfSection): Uint8Array {
  const packed = fileRange(elf, section);
  const where = `section ${quoted(section.name)} of ${quoted(elf.name)}`;
  if (section.flags & sectionFlag.compressed) {
    const wide = elf.bits === 64;
    const cursor = new Cursor(packed, elf.littleEndian, where);
    const method = cursor.u32();
    if (wide) cursor.skip(4);
    const size = cursor.length(wide ? 8 : 4);
    cursor.skip(wide ? 8 : 4);
    return inflated(packed.subarray(cursor.position), size, method, where);
  }
  if (section.name.startsWith('.zdebug_')) {
    // The old GNU way: "ZLIB" and the size, big-endian whatever the target.
    const cursor = new Cursor(packed, false, where);
    if (cursor.u32() !== 0x5a4c4942) return packed;
    const size = cursor.length(8);
    return inflated(packed.subarray(cursor.position), size, 1, where);
  }
  return packed;
}

function inflated(packed: Uint8Array, size: number, method: number, where: string): Uint8Array {
  if (size > mostBytes || (method === 1 && size > packed.length * mostExpansion + 64)) {
    throw new FirmwareError(
      'malformed_image',
      `${where} claims to expand from ${packed.length} to ${size} bytes: refused`,
    );
  }
  const zlib = load('node:zlib') as typeof import('node:zlib') & { zstdDecompressSync?: Inflate };
  const inflate = method === 1 ? zlib.inflateSync : method === 2 ? zlib.zstdDecompressSync : undefined;
  if (!inflate) throw unknownCompression(method, where);
  let contents: Uint8Array;
  try {
    contents = inflate(packed, { maxOutputLength: Math.max(size, 1) });
  } catch (cause) {
    throw new FirmwareError(
      'malformed_image',
      `${where} cannot be decompressed: ${(cause as Error).message}`,
    );
  }
  if (contents.length !== size) {
    throw new FirmwareError(
      'malformed_image',
      `${where} expands to ${contents.length} bytes, but claims ${size}`,
    );
  }
  return contents;
}

type Inflate = (packed: Uint8Array, options: { maxOutputLength: number }) => Uint8Array;

function unknownCompression(method: number, where: string): FirmwareError {
  const cure =
    method === 2
      ? 'with Zstandard, which this Node does not offer: take Node 22.15 or newer, or build with -gz=zlib'
      : `by method ${method}, which is not known: build with -gz=zlib`;
  return new FirmwareError('unsupported', `${where} is compressed ${cure}`);
}
