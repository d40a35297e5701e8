import { createHash } from 'node:crypto';
import { mkdir, readFile, writeFile } from 'node:fs/promises';
import { join, resolve } from 'node:path';
import type { PartialRound, Share } from '../verdict/parts.js';
import type { Target } from './each_build.js';
import { exactJson, fromExactJson } from './exact_json.js';
import type { BuildRead } from './read_build.js';
import { shownPath } from './read_spec.js';
import { Fault } from './surroundings.js';

/** What one part found, for `pawl join`. */
export interface PartFile extends Share {
  /** The version of pawl. */
  pawl: string;
  targets: PartTarget[];
}

/** One build of a spec in a part. */
export interface PartTarget {
  file: string;
  build: string | undefined;
  /** Of the checked spec with all that it includes, and of what was saved and latched. */
  specDigest: string;
  read: BuildRead | undefined;
  rounds: PartialRound[];
  /** The same plants with the latched coefficients; undefined where these are today's, or cannot be run. */
  latchedRounds: PartialRound[] | undefined;
}

/** SHA-256 of a checked spec, the saved counterexamples and the latched reference, so that parts of different ones are told apart. */
export function digestOf({ spec, saved, latched }: Pick<Target, 'spec' | 'saved' | 'latched'>): string {
  const plants = saved.map((values) => [...values]);
  const reference = latched?.reference;
  return createHash('sha256').update(exactJson({ spec, plants, reference })).digest('hex');
}

/** Writes a part into a folder, which is made where there is none. @returns its path. */
export async function writePart(folder: string, part: PartFile): Promise<string> {
  await mkdir(folder, { recursive: true });
  const path = join(folder, `part-${part.part}-of-${part.of}.json`);
  await writeFile(path, `${exactJson(part)}\n`);
  return path;
}

/** @throws {Fault} where there is no such file, or it is no part. */
export async function readPart(cwd: string, path: string): Promise<PartFile> {
  const shown = shownPath(cwd, path);
  let text: string;
  try {
    text = await readFile(resolve(cwd, path), 'utf8');
  } catch (error) {
    const missing = (error as NodeJS.ErrnoException).code === 'ENOENT';
    throw new Fault([`${shown}: ${missing ? 'there is no such file' : 'cannot be read'}`]);
  }
  try {
    const part = fromExactJson(text) as PartFile;
    if (isPart(part)) return part;
  } catch (error) {
    if (!(error instanceof SyntaxError)) throw error;
  }
  throw new Fault([`${shown}: is no part; 'pawl check --part 1 --of 4 --out DIR' writes some`]);
}

function isPart(value: Partial<PartFile> | null): value is PartFile {
  return (
    typeof value?.pawl === 'string' &&
    Number.isInteger(value.part) &&
    Number.isInteger(value.of) &&
    Array.isArray(value.targets)
  );
}
