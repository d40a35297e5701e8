import { allVariables } from './all_variables.js';
import type { Coefficient } from './coefficient.js';
import { readOrNone } from './compare_images.js';
import type { FirmwareImage } from './image.js';
import { type Leaf, leavesOf } from './leaves.js';
import { elfOf } from './match_paths.js';
import type { CoefficientRequest } from './request.js';

/** A stored number that may be a coefficient of a controller, and how a first spec would ask for it. */
export interface Candidate {
  request: CoefficientRequest;
  coefficient: Coefficient;
  kind: 'float' | 'fixed_point' | 'integer';
}

/** Longer tables are look-up tables, texts or pictures. */
const longestTable = 64;
const mostCandidates = 2000;

/** Fixed-point type names of the common signal-processing libraries for microcontrollers (common practice). */
const fixedPointTypes: Record<string, string> = {
  q7_t: 'Q1.7',
  q15_t: 'Q1.15',
  q31_t: 'Q1.31',
  q63_t: 'Q1.63',
};

/**
 * Floats, fixed-point numbers and integers which a controller may use as coefficients, floats first, otherwise in the order
 * of the image. What has no value in the file, characters, truth values, and what a library brought along are left out.
 * @throws FirmwareError without debug information
 */
export function candidates(image: FirmwareImage): Candidate[] {
  const names = new Set<string>();
  const found: Candidate[] = [];
  for (const variable of allVariables(elfOf(image))) {
    if (isFromLibrary(variable.declaredAt?.file, variable.path)) continue;
    for (const leaf of leavesOf(variable.type, variable.path)) {
      const candidate = candidateAt(image, leaf, names);
      if (candidate) found.push(candidate);
      if (found.length >= mostCandidates) return sorted(found);
    }
  }
  return sorted(found);
}

function sorted(found: Candidate[]): Candidate[] {
  const rank = { float: 0, fixed_point: 1, integer: 2 };
  return found.sort((a, b) => rank[a.kind] - rank[b.kind]);
}

function isFromLibrary(file: string | undefined, path: string): boolean {
  return (
    path.startsWith('_') ||
    path.startsWith('std::') ||
    (file !== undefined && /(^|\/)(newlib|libgcc|libc|include\/c\+\+)\//.test(file))
  );
}

function candidateAt(image: FirmwareImage, leaf: Leaf, names: Set<string>): Candidate | undefined {
  const element = leaf.type.kind === 'array' ? leaf.type.element : leaf.type;
  if (
    element.kind !== 'number' ||
    /^(unsigned |signed )?char$|^(_Bool|bool|wchar_t|char\d+_t)$/.test(element.name)
  )
    return undefined;
  const count = leaf.lengths.reduce((product: number, length) => product * (length ?? 0), 1);
  if (count < 1 || count > longestTable) return undefined;
  const coefficient = readOrNone(image, leaf.path);
  if (!coefficient) return undefined;
  const format = fixedPointTypes[element.name];
  const kind = element.meaning === 'float' ? 'float' : format ? 'fixed_point' : 'integer';
  const request: CoefficientRequest = { name: freshName(leaf.path, names), at: leaf.path };
  return { request: format ? { ...request, format } : request, coefficient, kind };
}

/** The shortest end of the path that is still free as a name: `kp`, then `gains_kp`, then with a number. */
function freshName(path: string, names: Set<string>): string {
  const parts = path.split(/[^A-Za-z0-9_]+/).filter((part) => part !== '');
  for (let length = 1; length <= parts.length; length++) {
    const last = parts.slice(-length);
    const name = last.join('_').toLowerCase();
    if (!/^[a-z_]/.test(name) || names.has(name)) continue;
    names.add(name);
    return name;
  }
  const base = `c_${parts.join('_').toLowerCase()}`;
  let number = 1;
  while (names.has(`${base}_${number}`)) number++;
  names.add(`${base}_${number}`);
  return `${base}_${number}`;
}
