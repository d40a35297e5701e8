import { oneLine } from './plain_text.js';
import { textTable } from './text_table.js';

/**
 * The machine code of a control law as a table of plain text, a row for each function.
 * @param law sizes in bytes, digests as SHA-256.
 */
export function lawTable(law: readonly { name: string; size: number; digest: string }[]): string {
  const rows = law.map(({ name, size, digest }) => [oneLine(name), `${size}`, digest]);
  return `${textTable([['function of the law', 'bytes', 'digest (SHA-256)'], ...rows])}\n`;
}
