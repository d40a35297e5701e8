import { createHash } from 'node:crypto';
import { textAttribute } from './dwarf/attributes.js';
import { at } from './dwarf/codes.js';
import { rootOf } from './dwarf/entry.js';
import { buildIdOf, compilerComments } from './elf/identity.js';
import { machineName } from './elf/machine.js';
import type { ElfImage, FirmwareImage } from './image.js';

/** Where the coefficients come from, for every report. */
export interface ImageDescription {
  name: string;
  kind: FirmwareImage['kind'];
  /** Bytes. */
  size: number;
  /** Lower-case hexadecimal digits. */
  sha256: string;
  /** The linker's build id in hexadecimal digits, where it wrote one. */
  buildId: string | undefined;
  /** What the compilers call themselves, each once, in the order of the image. */
  producers: string[];
  /** The processor, e.g. `Arm`; undefined where the image does not say it. */
  machine: string | undefined;
  /** Width of an address, where the image says it. */
  bits: 32 | 64 | undefined;
  /** Undefined for values that are not stored in an image. */
  byteOrder: 'little' | 'big' | undefined;
  /** The ELF file that gave the names to an image without any. */
  symbols: ImageDescription | undefined;
}

/** Says what an image is. */
export function describeImage(image: FirmwareImage): ImageDescription {
  const elf = image.kind === 'elf' ? image.elf : undefined;
  const littleEndian =
    image.kind === 'elf' ? image.elf.littleEndian : 'contents' in image && image.littleEndian;
  return {
    name: image.name,
    kind: image.kind,
    size: image.bytes.length,
    sha256: createHash('sha256').update(image.bytes).digest('hex'),
    buildId: elf && buildIdOf(elf),
    producers: image.kind === 'elf' ? producersOf(image) : [],
    machine: elf && machineName(elf.machine),
    bits: elf?.bits,
    byteOrder: 'values' in image ? undefined : littleEndian ? 'little' : 'big',
    symbols: 'contents' in image && image.symbols ? describeImage(image.symbols) : undefined,
  };
}

function producersOf(image: ElfImage): string[] {
  const producers = new Set<string>();
  for (const unit of image.debug.units()) {
    const root = rootOf(unit);
    const producer = root && textAttribute(root, at.producer);
    if (producer) producers.add(producer);
  }
  return producers.size > 0 ? [...producers] : compilerComments(image.elf);
}
