import fc from 'fast-check';
import { describe, expect, it } from 'vitest';
import { columnsOf } from '../../src/report/plain_text.js';
import { padded, textTable } from '../../src/report/text_table.js';
import { wrapText } from '../../src/report/wrap_text.js';

describe('wrapText', () => {
  it('breaks at blanks and hangs the lines after the first', () => {
    expect(wrapText('one two three four', 11)).toEqual(['one two', 'three four']);
    expect(wrapText('one two three four', 11, 2, 2)).toEqual(['  one two', '    three', '    four']);
    expect(wrapText('', 10)).toEqual(['']);
  });

  it('cuts a word that fits no line', () => {
    expect(wrapText('abcdefghij', 4)).toEqual(['abcd', 'efgh', 'ij']);
  });

  it('keeps a number and its unit together', () => {
    expect(wrapText('fewer than 1.6 % do so', 15)).toEqual(['fewer than', '1.6 % do so']);
    expect(wrapText('its bound (191.3 N*m); nothing', 18)).toEqual(['its bound', '(191.3 N*m);', 'nothing']);
    expect(wrapText('at most 30 mrad', 10)).toEqual(['at most', '30 mrad']);
  });

  it('loses no word, adds none, and keeps to the width', () => {
    const words = fc.array(fc.stringMatching(/^[a-z(%)0-9]{1,12}$/), { minLength: 1, maxLength: 30 });
    fc.assert(
      fc.property(
        words,
        fc.integer({ min: 16, max: 60 }),
        fc.integer({ min: 0, max: 4 }),
        (all, width, indent) => {
          const lines = wrapText(all.join(' '), width, indent);
          expect(lines.join(' ').replaceAll(' ', '')).toBe(all.join(''));
          for (const line of lines) expect(columnsOf(line)).toBeLessThanOrEqual(width);
        },
      ),
      { seed: 71, numRuns: 300 },
    );
  });
});

describe('textTable', () => {
  it('aligns columns, numbers on the right where asked', () => {
    const rows = [
      ['name', 'value', ''],
      ['friction', '10', 'N*m'],
      ['drive', '191.34', ''],
    ];
    expect(textTable(rows, [1])).toBe('name       value\nfriction      10  N*m\ndrive     191.34');
  });

  it('counts characters, not code units', () => {
    expect(padded('👩µ', 4)).toBe('👩µ  ');
    expect(padded('abc', 2)).toBe('abc');
    expect(padded('a', 3, true)).toBe('  a');
  });
});
