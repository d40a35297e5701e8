import { allVariables } from './all_variables.js';
import { at } from './dwarf/codes.js';
import { typeOf } from './dwarf/data_type.js';
import { findVariable } from './dwarf/find_variable.js';
import { entryWith } from './dwarf/variables.js';
import { FirmwareError, quoted } from './failure.js';
import type { ElfImage, FirmwareImage } from './image.js';
import { indicesOf, type Leaf, leavesOf } from './leaves.js';
import { parsePath } from './path.js';
import { pathsIn } from './values/value_tree.js';

/** More coefficients than this at once are no use to anyone. */
const mostPaths = 100_000;

/** Whether a path has a wildcard: `*` for any name, `[*]` for any index, `**` for anything below. */
export function isPattern(path: string): boolean {
  return path.includes('*');
}

/**
 * The paths of all numbers and tables of numbers which a pattern fits, e.g. `azimuth.**`, `*.gains.kp`, `channels[*].slope`,
 * in the order of the debug information. A path without a wildcard is returned as it is.
 * @throws FirmwareError `no_such_symbol` when nothing fits
 */
export function matchPaths(image: FirmwareImage, pattern: string): string[] {
  if (!isPattern(pattern)) return [pattern];
  const fits = patternExpression(pattern);
  const paths: string[] = [];
  const leaves = 'values' in image ? pathsIn(image.values) : leavesFor(elfOf(image), pattern);
  for (const leaf of leaves) {
    paths.push(...fittingPaths(leaf, fits));
    if (paths.length > mostPaths)
      throw new FirmwareError('bad_request', `${quoted(pattern)} fits more than ${mostPaths} coefficients`);
  }
  if (paths.length === 0)
    throw new FirmwareError('no_such_symbol', `nothing in ${quoted(image.name)} fits ${quoted(pattern)}`);
  return [...new Set(paths)];
}

/** The ELF file which has the names. @throws FirmwareError `bad_request` where there is none */
export function elfOf(image: FirmwareImage): ElfImage {
  const elf = image.kind === 'elf' ? image : 'contents' in image ? image.symbols : undefined;
  if (elf) return elf;
  if ('values' in image) {
    throw new FirmwareError(
      'bad_request',
      `${quoted(image.name)} is no ELF image: its values are listed by a wildcard such as **`,
    );
  }
  throw new FirmwareError(
    'bad_request',
    `${quoted(image.name)} has no names: give the ELF file of the same build as symbols`,
  );
}

/** The expression for a whole path: a name's characters end at `.`, `:` and brackets. */
function patternExpression(pattern: string): RegExp {
  const parts = pattern.trim().split(/(\*\*|\[\*\]|\*)/);
  const source = parts.map((part) => {
    if (part === '**') return '.*';
    if (part === '[*]') return '\\[\\d+\\]';
    if (part === '*') return '[^.:[\\]]*';
    return part.replace(/[\\^$.|?+()[\]{}]/g, '\\$&');
  });
  return new RegExp(`^${source.join('')}$`);
}

function* leavesFor(image: ElfImage, pattern: string): Generator<Leaf> {
  const root = /^(?:[^*.[]|\.\d)+(?=[.[])/.exec(pattern)?.[0];
  const namesFile = /[^:]:(?!:)/.test(pattern);
  if (root !== undefined && !namesFile) {
    // The variable is named in full: there is no need to list all others.
    for (const variable of findVariable(image.debug, parsePath(root)).definitions) {
      const typed = entryWith(variable, at.type);
      if (typed) yield* leavesOf(typeOf(typed), root);
    }
    return;
  }
  for (const variable of allVariables(image)) yield* leavesOf(variable.type, variable.path);
}

/** A table is meant as a whole, or element by element where the pattern ends in an index. */
function fittingPaths(leaf: Pick<Leaf, 'path' | 'lengths'>, fits: RegExp): string[] {
  if (fits.test(leaf.path)) return [leaf.path];
  const { lengths } = leaf;
  if (lengths.length === 0 || lengths.some((length) => length === undefined)) return [];
  return [...indicesOf(lengths as number[])]
    .map((index) => leaf.path + index)
    .filter((path) => fits.test(path));
}
