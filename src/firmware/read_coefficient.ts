import type { Coefficient } from './coefficient.js';
import { FirmwareError, quoted } from './failure.js';
import type { FirmwareImage } from './image.js';
import { parseFormat } from './number_format.js';
import { parsePath } from './path.js';
import { readAddress } from './read_address.js';
import { readElf } from './read_elf.js';
import type { CoefficientRequest } from './request.js';
import { scaled } from './scaling.js';
import { readValue } from './values/value_tree.js';

/**
 * Reads one coefficient.
 * @throws FirmwareError with the request's name; there is never a value that was guessed
 */
export function readCoefficient(image: FirmwareImage, request: CoefficientRequest): Coefficient {
  try {
    return scaled(readUnscaled(image, request), request);
  } catch (error) {
    if (!(error instanceof FirmwareError)) throw error;
    const message = error.message.includes(request.at)
      ? error.message
      : `${quoted(request.at)}: ${error.message}`;
    throw new FirmwareError(error.code, message, request.name);
  }
}

/** Reads all coefficients and gathers all errors, so that one run shows them all. */
export function readCoefficients(
  image: FirmwareImage,
  requests: readonly CoefficientRequest[],
): { coefficients: Map<string, Coefficient>; errors: FirmwareError[] } {
  const coefficients = new Map<string, Coefficient>();
  const errors: FirmwareError[] = [];
  for (const request of requests) {
    try {
      coefficients.set(request.name, readCoefficient(image, request));
    } catch (error) {
      if (!(error instanceof FirmwareError)) throw error;
      errors.push(error);
    }
  }
  return { coefficients, errors };
}

function readUnscaled(image: FirmwareImage, request: CoefficientRequest): Coefficient {
  const isAddressed = request.address !== undefined;
  if (request.address !== undefined && !('values' in image))
    return readAddress(image, request.address, request);
  const path = parsePath(request.at);
  const format = request.format === undefined ? undefined : parseFormat(request.format);
  if ('values' in image) {
    if (isAddressed)
      throw new FirmwareError('bad_request', `${quoted(image.name)} has no addresses: give a name instead`);
    return readValue(image.values, path, format, image.name);
  }
  if (image.kind === 'elf') return readElf(image, path, format, request);
  if (image.symbols) return readElf(image.symbols, path, format, request);
  throw new FirmwareError(
    'bad_request',
    `${quoted(image.name)} has no names: give the ELF file of the same build as symbols, or address and format of ${quoted(request.at)}`,
  );
}
