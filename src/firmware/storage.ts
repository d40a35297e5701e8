import { hex } from './cursor.js';
import type { Place } from './dwarf/location.js';
import { hasContents, type ReadOptions, readMemory } from './elf/memory.js';
import { FirmwareError, quoted } from './failure.js';
import { checkFlashed } from './flash/flash_image.js';
import type { ElfImage } from './image.js';

/** The bytes of one variable, wherever they are. Offsets are bytes from its beginning. */
export interface Storage {
  /** @throws FirmwareError where there are none */
  read(offset: number, size: number): Uint8Array;
  /** The same for bytes which are an address. */
  readAddress(offset: number, size: number): Uint8Array;
  /** The address on the target; undefined for a constant without one. */
  address(offset: number): number | undefined;
}

/**
 * The storage behind a place.
 * @param size bytes of the whole variable, needed for a constant that is only a number
 * @throws FirmwareError `no_fixed_place` where there is none
 */
export function storageAt(image: ElfImage, place: Place, size: number, options: ReadOptions): Storage {
  if (image.flash && place.kind !== 'memory') throw notInFlash(image, options);
  switch (place.kind) {
    case 'memory':
      return memoryStorage(image, place.address, options);
    case 'bytes':
      return constantStorage(place.bytes, options);
    case 'number':
      return constantStorage(bytesOfNumber(place.value, size, image.elf.littleEndian), options);
    case 'pieces':
      return piecesStorage(image, place.pieces, options);
    case 'none':
      throw new FirmwareError(
        'no_fixed_place',
        `${options.what} has no value that can be read from the image: ${place.why}`,
      );
  }
}

function memoryStorage(image: ElfImage, start: number, options: ReadOptions): Storage {
  const { elf, flash } = image;
  const readAs = (isAddress: boolean) => (offset: number, size: number) => {
    const bytes = readMemory(elf, start + offset, size, { ...options, isAddress });
    if (flash && hasContents(elf, start + offset))
      checkFlashed(flash, elf, start + offset, bytes, options.what);
    return bytes;
  };
  return {
    read: readAs(false),
    readAddress: readAs(true),
    // The sections of an unlinked object are placed by the linker only.
    address: (offset) => (elf.relocatable ? undefined : start + offset),
  };
}

function notInFlash(image: ElfImage, options: ReadOptions): FirmwareError {
  return new FirmwareError(
    'no_fixed_place',
    `${options.what} has no address in ${quoted(image.name)}, so that ${quoted(image.flash?.name ?? '')} cannot be compared: keep it in memory (volatile, or used by its address)`,
  );
}

function constantStorage(bytes: Uint8Array, options: ReadOptions): Storage {
  const read = (offset: number, size: number) => {
    if (offset + size > bytes.length) {
      throw new FirmwareError(
        'malformed_image',
        `${options.what}: the constant in the debug information has ${bytes.length} bytes, wanted ${size} at ${hex(offset)}`,
      );
    }
    return bytes.subarray(offset, offset + size);
  };
  return { read, readAddress: read, address: () => undefined };
}

function bytesOfNumber(value: bigint, size: number, littleEndian: boolean): Uint8Array {
  const bytes = new Uint8Array(Math.min(size, 16));
  let left = value;
  for (let i = 0; i < bytes.length; i++, left >>= 8n) {
    bytes[littleEndian ? i : bytes.length - 1 - i] = Number(left & 0xffn);
  }
  return bytes;
}

function piecesStorage(
  image: ElfImage,
  pieces: { place: Place; size: number }[],
  options: ReadOptions,
): Storage {
  const starts: number[] = [];
  let total = 0;
  for (const piece of pieces) {
    starts.push(total);
    total += piece.size;
  }
  const parts = (offset: number, size: number) =>
    pieces.flatMap((piece, i) => {
      const from = Math.max(offset, starts[i]);
      const to = Math.min(offset + size, starts[i] + piece.size);
      return from < to ? [{ piece, from: from - starts[i], length: to - from }] : [];
    });
  const read = (offset: number, size: number) => {
    const bytes = parts(offset, size).map(({ piece, from, length }) =>
      storageAt(image, piece.place, piece.size, options).read(from, length),
    );
    const whole = Buffer.concat(bytes);
    if (whole.length < size)
      throw new FirmwareError('no_fixed_place', `${options.what}: a part of it was removed by the optimiser`);
    return whole;
  };
  return {
    read,
    readAddress: read,
    address(offset) {
      const [part] = parts(offset, 1);
      return part?.piece.place.kind === 'memory' && !image.elf.relocatable
        ? part.piece.place.address + part.from
        : undefined;
    },
  };
}
