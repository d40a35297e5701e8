import { readFile } from 'node:fs/promises';
import { resolve } from 'node:path';
import type { CoefficientRead } from '../verdict/run.js';
import { shownPath } from './read_spec.js';

/** An initialiser is looked for in so many lines after the declaration. */
const mostLines = 400;
/** Larger files are no sources that people write. */
const largest = 4_000_000;

/**
 * The coefficients with the places of their numbers in the sources, where these are found: the debug information names the
 * file and the line of the variable; of a member the line of its own initialiser, if it is written out.
 *
 * @param folders in which the file may be, absolute: the first that has it counts.
 */
export async function withSources(
  cwd: string,
  folders: readonly string[],
  coefficients: readonly CoefficientRead[],
): Promise<CoefficientRead[]> {
  const files = new Map<string, Promise<{ path: string; lines: string[] } | undefined>>();
  return Promise.all(
    coefficients.map(async (read) => {
      const at = read.coefficient.declaredAt;
      if (!at) return read;
      const found = files.get(at.file) ?? firstOf(folders, at.file);
      files.set(at.file, found);
      const file = await found;
      if (!file) return read;
      const line = initialiserLine(file.lines, at.line, read.coefficient.path);
      return { ...read, source: { file: shownPath(cwd, file.path), line } };
    }),
  );
}

async function firstOf(
  folders: readonly string[],
  file: string,
): Promise<{ path: string; lines: string[] } | undefined> {
  for (const folder of folders) {
    const path = resolve(folder, file);
    const text = await readFile(path, 'utf8').catch(() => undefined);
    if (text !== undefined && text.length < largest) return { path, lines: text.split('\n') };
  }
  return undefined;
}

/**
 * The line, counted from 1, of `.member = …` in the definition that begins at the declared line and ends with a `}` at the
 * beginning of a line; the declared line itself where it is not there, or more than once.
 */
export function initialiserLine(lines: readonly string[], declared: number, path: string): number {
  const member = /\.(\w+)(\[\d+\])*$/.exec(path)?.[1];
  if (member === undefined) return declared;
  const wanted = new RegExp(`\\.${member}\\s*=[^=]`);
  const matches: number[] = [];
  for (let line = declared; line <= Math.min(lines.length, declared + mostLines); line++) {
    const text = lines[line - 1];
    if (wanted.test(text)) matches.push(line);
    if (text.startsWith('}')) break;
  }
  return matches.length === 1 ? matches[0] : declared;
}
