import {
  type Coefficient,
  type FirmwareImage,
  isPattern,
  matchPaths,
  readCoefficient,
  readOrNone,
} from '../firmware/index.js';
import { faultOf } from './open_image.js';
import { Fault } from './surroundings.js';

/**
 * The coefficients that paths and patterns name, each once, in their order. What a pattern fits but has no value in the
 * file is passed over; what is named in full must have one.
 * @throws {Fault} with a line for each path that cannot be read.
 */
export function coefficientsAt(image: FirmwareImage, paths: readonly string[]): Coefficient[] {
  const found = new Map<string, Coefficient>();
  const faults: string[] = [];
  for (const path of paths) {
    try {
      for (const one of fitting(image, path)) found.set(one.path, one);
    } catch (error) {
      const fault = faultOf(error);
      if (!(fault instanceof Fault)) throw error;
      faults.push(...fault.lines);
    }
  }
  if (faults.length > 0) throw new Fault(faults);
  return [...found.values()];
}

/** @throws {Fault} where everything that fits is without a value. */
function fitting(image: FirmwareImage, path: string): Coefficient[] {
  if (!isPattern(path)) return [readCoefficient(image, { name: path, at: path })];
  const read = matchPaths(image, path).flatMap((one) => readOrNone(image, one) ?? []);
  if (read.length === 0)
    throw new Fault([
      `nothing that fits '${path}' has a value in '${image.name}': it is set when the program runs`,
    ]);
  return read;
}
