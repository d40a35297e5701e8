import { oneLine } from './plain_text.js';

/** One word of a POSIX shell; what cannot be shown in the `$'…'` form of POSIX.1-2024, so that it stays one line. */
export function shellWord(text: string): string {
  if (/^[\w./:@%+=,-]+$/.test(text)) return text;
  if (oneLine(text) === text) return `'${text.replaceAll("'", `'\\''`)}'`;
  return `$'${oneLine(text.replace(/[\\']/g, '\\$&'), octalBytes)}'`;
}

/** A path as a word of a shell: one that begins with a dash would be read as an option. */
export function shellPath(path: string): string {
  return shellWord(path.startsWith('-') ? `./${path}` : path);
}

function octalBytes(character: string): string {
  return [...new TextEncoder().encode(character)]
    .map((byte) => `\\${byte.toString(8).padStart(3, '0')}`)
    .join('');
}
