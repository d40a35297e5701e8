import { readFileSync, realpathSync } from 'node:fs';
import { readFile } from 'node:fs/promises';
import { dirname, relative, resolve, sep } from 'node:path';
import { formatSpecError, type Includes, loadSpec } from '../spec/index.js';
import type { Spec } from '../spec/spec.js';
import { Fault } from './surroundings.js';
import { vocabulary } from './vocabulary.js';

/** A path as messages and reports show it: from the working folder, with forward slashes. */
export function shownPath(cwd: string, path: string): string {
  return relative(cwd, resolve(cwd, path)).split('\\').join('/') || '.';
}

/**
 * Reads and checks a spec file.
 * @throws {Fault} with all errors of the spec, or when the file cannot be read.
 */
export async function readSpec(cwd: string, path: string): Promise<Spec> {
  const shown = shownPath(cwd, path);
  const text = await readText(resolve(cwd, path), shown);
  const loaded = loadSpec(text, shown, vocabulary, includesFrom(cwd, shown));
  if (loaded.kind === 'spec') return loaded.spec;
  throw new Fault(loaded.errors.map(formatSpecError));
}

/** Included files lie below the working folder, or below the spec's where that lies elsewhere; links do not lead out of it. */
function includesFrom(cwd: string, spec: string): Includes {
  const within = spec.startsWith('../') ? dirname(spec) : '.';
  const top = realpathSync(resolve(cwd, within));
  return {
    within,
    read: (path) => {
      try {
        const real = realpathSync(resolve(cwd, path));
        return real.startsWith(`${top}${sep}`) ? readFileSync(real, 'utf8') : undefined;
      } catch {
        return undefined;
      }
    },
  };
}

async function readText(path: string, shown: string): Promise<string> {
  try {
    return await readFile(path, 'utf8');
  } catch (error) {
    const missing = (error as NodeJS.ErrnoException).code === 'ENOENT';
    throw new Fault([
      missing ? `${shown}: there is no such file` : `${shown}: cannot be read: ${(error as Error).message}`,
    ]);
  }
}
