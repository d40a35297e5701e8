import fc from 'fast-check';
import { describe, expect, it } from 'vitest';
import { columnsOf } from '../../src/report/plain_text.js';
import {
  rowLines,
  rowWidths,
  type TerminalRow,
  terminalHeadings,
  terminalRow,
} from '../../src/report/terminal_row.js';
import { requirements } from './sample_run.js';

const cell = fc.string({ unit: 'grapheme', maxLength: 60 });
const anyRow: fc.Arbitrary<TerminalRow> = fc.record({
  verdict: fc.constantFrom('┣━┫ met', '┣╱┫ broken', '┣?┫ unjudged'),
  name: cell,
  measure: cell,
  limit: cell,
  nominal: cell,
  worst: cell,
  headroom: fc.constantFrom('none', '100 %', '-12.3 %'),
});

describe('a row on the terminal', () => {
  it('has the cells of its requirement', () => {
    expect(terminalRow(requirements[2])).toEqual({
      verdict: '┣╱┫ broken',
      name: 'AZ-3',
      measure: 'peak deviation of angle',
      limit: 'at most 30 mrad',
      nominal: '21.2 mrad',
      worst: '30.003 mrad',
      headroom: '-0.01 %',
    });
  });

  it('fits the width whatever its cells are, in columns that all rows share', () => {
    fc.assert(
      fc.property(
        fc.array(anyRow, { minLength: 1, maxLength: 6 }),
        fc.integer({ min: 80, max: 100 }),
        (rows, width) => {
          const widths = rowWidths([terminalHeadings, ...rows], width);
          const total = Object.values(widths).reduce((sum, one) => sum + one, 0) + 2 * 6;
          expect(total).toBeLessThanOrEqual(width);
          for (const line of rows.flatMap((row) => rowLines(row, widths, (text) => text))) {
            expect(columnsOf(line)).toBeLessThanOrEqual(width);
          }
        },
      ),
      { seed: 101, numRuns: 200 },
    );
  });

  it('takes one line where there is room, and breaks cells where there is not', () => {
    const row = terminalRow(requirements[5]);
    const lines = (width: number) => rowLines(row, rowWidths([terminalHeadings, row], width), (text) => text);
    expect(lines(100)).toHaveLength(1);
    expect(lines(80).join(' ').replace(/\s+/g, ' ')).toContain('phase margin at');
    expect(lines(80).length).toBeGreaterThan(1);
  });

  it('paints the verdict alone, and once', () => {
    const row = terminalRow(requirements[5]);
    const painted: string[] = [];
    rowLines(row, rowWidths([row], 80), (text) => {
      painted.push(text.trim());
      return text;
    });
    expect(painted).toEqual(['┣━┫ met']);
  });
});
