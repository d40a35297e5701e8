import type { Coefficient } from './coefficient.js';
import { FirmwareError } from './failure.js';
import type { FirmwareImage } from './image.js';
import { matchPaths } from './match_paths.js';
import { readCoefficient } from './read_coefficient.js';

/** What differs between two builds. */
export interface ImageComparison {
  /** In both, with other bits or of another type. */
  changed: { path: string; before: Coefficient; after: Coefficient }[];
  /** Only in the second. */
  added: Coefficient[];
  /** Only in the first. */
  vanished: Coefficient[];
  /** How many are the same in both. */
  unchanged: number;
}

/**
 * Compares all coefficients of two builds which a pattern fits; what has no value in the file (`.bss`) does not count.
 * Addresses may differ freely: a change of code moves everything.
 * @throws FirmwareError where one of them cannot be listed
 */
export function compareImages(before: FirmwareImage, after: FirmwareImage, pattern = '**'): ImageComparison {
  const [old, fresh] = [readAll(before, pattern), readAll(after, pattern)];
  const result: ImageComparison = { changed: [], added: [], vanished: [], unchanged: 0 };
  for (const [path, coefficient] of old) {
    const other = fresh.get(path);
    if (!other) result.vanished.push(coefficient);
    else if (fingerprint(coefficient) === fingerprint(other)) result.unchanged++;
    else result.changed.push({ path, before: coefficient, after: other });
  }
  for (const [path, coefficient] of fresh) if (!old.has(path)) result.added.push(coefficient);
  return result;
}

function fingerprint(coefficient: Coefficient): string {
  return `${coefficient.type} ${coefficient.elements.map((element) => element.stored).join(' ')}`;
}

/** All coefficients that can be read; those that cannot have no value in the file. */
function readAll(image: FirmwareImage, pattern: string): Map<string, Coefficient> {
  const found = new Map<string, Coefficient>();
  for (const path of pathsOrNone(image, pattern)) {
    const coefficient = readOrNone(image, path);
    if (coefficient) found.set(path, coefficient);
  }
  return found;
}

function pathsOrNone(image: FirmwareImage, pattern: string): string[] {
  try {
    return matchPaths(image, pattern);
  } catch (error) {
    // Nothing fits: then everything of the other build was added or has vanished.
    if (error instanceof FirmwareError && error.code === 'no_such_symbol') return [];
    throw error;
  }
}

const withoutValue = [
  'no_contents',
  'no_fixed_place',
  'not_a_number',
  'not_exact',
  'incomplete_type',
  'no_such_symbol',
  'garbage_collected',
];

/** The coefficient, undefined where it has no value that could be compared. */
export function readOrNone(image: FirmwareImage, path: string): Coefficient | undefined {
  try {
    return readCoefficient(image, { name: path, at: path });
  } catch (error) {
    if (error instanceof FirmwareError && withoutValue.includes(error.code)) return undefined;
    throw error;
  }
}
