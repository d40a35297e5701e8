import type { Coefficient, StoredElement } from './coefficient.js';
import { bitsOf, numberOf, storedText } from './decode_number.js';
import { readMemory } from './elf/memory.js';
import { FirmwareError, quoted } from './failure.js';
import { readFlash } from './flash/flash_image.js';
import type { ElfImage, FlashImage } from './image.js';
import { formatText, parseFormat } from './number_format.js';
import { remarked } from './remark.js';
import type { CoefficientRequest } from './request.js';

/** More elements than this are no coefficient. */
const mostElements = 1 << 20;

/**
 * Reads numbers at an address, for images without names.
 * @throws FirmwareError `needs_format` without a format, `no_contents` where the image has no bytes there
 */
export function readAddress(
  image: ElfImage | FlashImage,
  address: number,
  request: CoefficientRequest,
): Coefficient {
  const path = request.at === '' ? `0x${address.toString(16)}` : request.at;
  if (request.format === undefined) {
    throw new FirmwareError(
      'needs_format',
      `${quoted(path)} is given by its address: give its format too, such as float32 or Q2.14`,
    );
  }
  const count = request.count ?? 1;
  if (!Number.isSafeInteger(address) || address < 0)
    throw new FirmwareError('bad_request', `${quoted(path)}: ${address} is no address`);
  if (!Number.isInteger(count) || count < 1 || count > mostElements) {
    throw new FirmwareError(
      'bad_request',
      `${quoted(path)}: a count of ${count}, expected 1 to ${mostElements}`,
    );
  }
  const format = parseFormat(request.format);
  const size = format.bits / 8;
  const bytes = bytesOf(image, address, size * count, request);
  const littleEndian = image.kind === 'elf' ? image.elf.littleEndian : image.littleEndian;
  const elements = Array.from({ length: count }, (_, i): StoredElement => {
    const bits = bitsOf(bytes.subarray(i * size, (i + 1) * size), littleEndian);
    return {
      value: numberOf(bits, format),
      stored: storedText(bits, format.bits),
      address: address + i * size,
    };
  });
  const shape = request.count === undefined ? [] : [count];
  const type = `${formatText(format)}${request.count === undefined ? '' : `[${count}]`}`;
  return { path, elements: remarked(elements, format), shape, type, format, declaredAt: undefined };
}

function bytesOf(
  image: ElfImage | FlashImage,
  address: number,
  size: number,
  request: CoefficientRequest,
): Uint8Array {
  const what = quoted(request.at === '' ? request.name : request.at);
  if (image.kind === 'elf')
    return readMemory(image.elf, address, size, { what, startsAtZero: request.startsAtZero });
  return readFlash(image.contents, address, size, what);
}
