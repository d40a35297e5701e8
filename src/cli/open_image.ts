import { resolve } from 'node:path';
import { FirmwareError, type FirmwareImage, openImageFile } from '../firmware/index.js';
import { shownPath } from './read_spec.js';
import { Fault } from './surroundings.js';

/**
 * Opens an image that was named on the command line.
 * @param symbols the ELF file of the same build, for an image without names.
 * @throws {Fault} when there is none, or it cannot be read.
 */
export async function openNamedImage(cwd: string, path: string, symbols?: string): Promise<FirmwareImage> {
  try {
    return await openImageFile(resolve(cwd, path), {
      name: shownPath(cwd, path),
      symbols: symbols === undefined ? undefined : resolve(cwd, symbols),
    });
  } catch (error) {
    throw faultOf(error);
  }
}

/** What a firmware build cannot give, as a line for people; any other error as it is. */
export function faultOf(error: unknown): unknown {
  return error instanceof FirmwareError ? new Fault([error.message]) : error;
}
