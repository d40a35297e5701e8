import { oneLine, shortened } from './plain_text.js';
import { textTable } from './text_table.js';

/** What a table says of a function of the law. */
interface LawRow {
  name: string;
  /** Bytes. */
  size: number;
  /** SHA-256. */
  digest: string;
  /** Names of functions that it calls. */
  calls: readonly string[];
}

const mostCalls = 4;

/**
 * The machine code of a control law as a table of plain text, a row for each function; with those that it calls and that are no
 * part of the law, since a change of them would not be seen.
 */
export function lawTable(law: readonly LawRow[]): string {
  const named = new Set(law.map(({ name }) => name));
  const rows = law.map(({ name, size, digest, calls }) => {
    const others = calls.filter((call) => !named.has(call)).map((call) => shortened(oneLine(call), 48));
    const left = others.length - mostCalls;
    const shown = others.slice(0, mostCalls).join(', ') + (left > 0 ? ` and ${left} more` : '');
    return [shortened(oneLine(name), 48), `${size}`, digest, shown];
  });
  return `${textTable([headings, ...rows])}\n`;
}

const headings = ['function of the law', 'bytes', 'digest (SHA-256)', 'calls outside the law'];
