import { createHash } from 'node:crypto';
import { textAttribute } from './dwarf/attributes.js';
import { at } from './dwarf/codes.js';
import { rootOf } from './dwarf/entry.js';
import { buildIdOf, compilerComments } from './elf/identity.js';
import { machineName } from './elf/machine.js';
import type { FirmwareImage } from './image.js';

/** Where the coefficients come from, for every report. */
export interface ImageDescription {
  name: string;
  /** Bytes. */
  size: number;
  /** Lower-case hexadecimal digits. */
  sha256: string;
  /** The linker's build id in hexadecimal digits, where it wrote one. */
  buildId: string | undefined;
  /** What the compilers call themselves, each once, in the order of the image. */
  producers: string[];
  /** The processor, e.g. `Arm`. */
  machine: string;
  /** Width of an address. */
  bits: 32 | 64;
  byteOrder: 'little' | 'big';
}

/** Says what an image is. */
export function describeImage(image: FirmwareImage): ImageDescription {
  const { elf } = image;
  return {
    name: image.name,
    size: image.bytes.length,
    sha256: createHash('sha256').update(image.bytes).digest('hex'),
    buildId: buildIdOf(elf),
    producers: producersOf(image),
    machine: machineName(elf.machine),
    bits: elf.bits,
    byteOrder: elf.littleEndian ? 'little' : 'big',
  };
}

function producersOf(image: FirmwareImage): string[] {
  const producers = new Set<string>();
  for (const unit of image.debug.units()) {
    const root = rootOf(unit);
    const producer = root && textAttribute(root, at.producer);
    if (producer) producers.add(producer);
  }
  return producers.size > 0 ? [...producers] : compilerComments(image.elf);
}
