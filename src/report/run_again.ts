import type { SpecRun } from '../verdict/run.js';
import { oneLine } from './plain_text.js';

/** The line that runs a spec again in a shell of the POSIX kind, the file quoted where it must be. */
export function runAgain({ file, provenance }: Pick<SpecRun, 'file' | 'provenance'>): string {
  const line = `pawl check ${shellWord(file)}`;
  if (provenance?.insteadOfSpecs) return `${line} --image ${shellWord(provenance.image)}`;
  return provenance?.buildSkipped ? `${line} --skip-build` : line;
}

/** One word of a POSIX shell; what cannot be shown in the `$'…'` form of POSIX.1-2024, so that it stays one line. */
function shellWord(path: string): string {
  // What begins with a dash would be read as an option.
  const text = path.startsWith('-') ? `./${path}` : path;
  if (/^[\w./:@%+=,-]+$/.test(text)) return text;
  if (oneLine(text) === text) return `'${text.replaceAll("'", `'\\''`)}'`;
  return `$'${oneLine(text.replace(/[\\']/g, '\\$&'), octalBytes)}'`;
}

function octalBytes(character: string): string {
  return [...new TextEncoder().encode(character)]
    .map((byte) => `\\${byte.toString(8).padStart(3, '0')}`)
    .join('');
}
