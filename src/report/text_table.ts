import { columnsOf } from './plain_text.js';

/** A table of plain text: one row an array of cells, the first row the headings; two blanks between columns. */
export function textTable(rows: readonly (readonly string[])[], right: readonly number[] = []): string {
  const widths = rows[0].map((_, column) => Math.max(...rows.map((row) => columnsOf(row[column]))));
  return rows
    .map((row) => row.map((cell, column) => padded(cell, widths[column], right.includes(column))).join('  '))
    .map((line) => line.trimEnd())
    .join('\n');
}

/** A cell filled up with blanks, on the left where it is to stand on the right. */
export function padded(text: string, width: number, onTheRight = false): string {
  const blanks = ' '.repeat(Math.max(0, width - columnsOf(text)));
  return onTheRight ? blanks + text : text + blanks;
}
