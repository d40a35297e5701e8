import fc from 'fast-check';
import { describe, expect, it } from 'vitest';
import { columnsOf, oneLine, shortened, visible } from '../../src/report/plain_text.js';
import { harmful, hostileNames } from './hostile.js';

describe('texts from outside', () => {
  it('show what would act unseen', () => {
    expect(oneLine('a\u0000b\nc')).toBe('a␀b␊c');
    expect(oneLine('x\u202Ey\u009bz')).toBe('x⟨U+202E⟩y⟨U+009B⟩z');
    expect(oneLine('\ud800')).toBe('⟨U+D800⟩');
    expect(visible('a\r\nb\tc\rd')).toBe('a\nb\tc␍d');
  });

  it.each(Object.entries(hostileNames))('hold nothing harmful afterwards: %s', (_, name) => {
    expect(oneLine(name)).not.toMatch(harmful);
    expect(oneLine(name)).not.toContain('\n');
    expect(visible(name)).not.toMatch(harmful);
    expect(oneLine(name).isWellFormed()).toBe(true);
  });

  it('are left as they are where they are harmless', () => {
    fc.assert(
      fc.property(fc.stringMatching(/^[ -~äöüΩµ°·👩]{0,30}$/u), (text) => oneLine(text) === text),
      { seed: 3, numRuns: 200 },
    );
  });

  it('hold nothing harmful whatever they are made of', () => {
    fc.assert(
      fc.property(fc.string({ unit: 'binary' }), (text) => !harmful.test(oneLine(text))),
      { seed: 4, numRuns: 500 },
    );
  });
});

describe('shortened', () => {
  it('keeps both ends and never grows beyond what is asked for', () => {
    expect(shortened('abcdefghij', 5)).toBe('ab…ij');
    expect(shortened('abc', 3)).toBe('abc');
    expect(shortened('abc', 1)).toBe('…');
    fc.assert(
      fc.property(fc.string({ unit: 'grapheme' }), fc.integer({ min: 0, max: 20 }), (text, most) => {
        const short = shortened(text, most);
        return columnsOf(short) <= Math.max(most, 0) && short.isWellFormed();
      }),
      { seed: 5, numRuns: 300 },
    );
  });
});
