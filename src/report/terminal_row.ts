import type { RequirementRun } from '../verdict/run.js';
import { formatHeadroom, formatResultShort } from './format_value.js';
import { columnsOf, oneLine, shortened } from './plain_text.js';
import { limitInWords, limitNumbers, measureWithSignal } from './requirement_in_words.js';
import { padded } from './text_table.js';
import { verdictSigns } from './verdict_words.js';
import { wrapText } from './wrap_text.js';

/** A requirement's row on the terminal, in cells. */
export interface TerminalRow {
  verdict: string;
  name: string;
  measure: string;
  limit: string;
  nominal: string;
  worst: string;
  headroom: string;
}

/** Widths of the columns that a table of rows takes. */
export type RowWidths = Record<keyof TerminalRow, number>;

const gap = 2;
const most: RowWidths = {
  verdict: 12,
  name: 14,
  measure: 48,
  limit: 24,
  nominal: 18,
  worst: 18,
  headroom: 8,
};

/** What a narrow terminal takes from the columns, in this order, and how much it leaves them each time. */
const leastWidths: readonly (readonly [keyof TerminalRow, number])[] = [
  ['limit', 14],
  ['measure', 15],
  ['limit', 10],
  ['worst', 9],
  ['nominal', 9],
  ['name', 5],
];

/** The headings of the rows. */
export const terminalHeadings: TerminalRow = {
  verdict: '',
  name: '',
  measure: 'requirement',
  limit: 'limit',
  nominal: 'nominal',
  worst: 'worst',
  headroom: 'headroom',
};

/** The cells of a requirement. */
export function terminalRow(requirement: RequirementRun): TerminalRow {
  const { verdict, name, limit, nominal, worst } = requirement;
  const against = limitNumbers(limit);
  return {
    verdict: `${verdictSigns[verdict.kind]} ${verdict.kind}`,
    name: oneLine(name),
    measure: measureWithSignal(requirement),
    limit: limitInWords(limit, requirement),
    nominal: formatResultShort(nominal.result, requirement, against),
    worst: formatResultShort(worst.result, requirement, against),
    headroom: formatHeadroom(worst.headroom),
  };
}

/** Column widths that fit the rows into `width` columns; where they do not, cells will break into lines. */
export function rowWidths(rows: readonly TerminalRow[], width: number): RowWidths {
  const keys = Object.keys(most) as (keyof TerminalRow)[];
  const widths = Object.fromEntries(
    keys.map((key) => [key, Math.min(most[key], Math.max(0, ...rows.map((row) => columnsOf(row[key]))))]),
  ) as RowWidths;
  const gaps = gap * (keys.length - 1);
  for (const [key, least] of leastWidths) {
    const over = keys.reduce((sum, one) => sum + widths[one], gaps) - width;
    if (over > 0) widths[key] = Math.max(Math.min(widths[key], least), widths[key] - over);
  }
  return widths;
}

/** The lines of a row: one, or as many as its longest cell needs; `paint` colours the verdict's cell. */
export function rowLines(row: TerminalRow, widths: RowWidths, paint: (text: string) => string): string[] {
  const cells = (Object.keys(most) as (keyof TerminalRow)[]).map((key) => ({
    key,
    lines: wrapText(shortened(row[key], 3 * widths[key]), widths[key]),
  }));
  const height = Math.max(...cells.map(({ lines }) => lines.length));
  return Array.from({ length: height }, (_, at) =>
    cells
      .map(({ key, lines }) => {
        const text = padded(lines[at] ?? '', widths[key], key === 'headroom');
        return key === 'verdict' && at === 0 ? paint(text) : text;
      })
      .join(' '.repeat(gap))
      .trimEnd(),
  );
}
