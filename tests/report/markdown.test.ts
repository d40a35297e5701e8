import fc from 'fast-check';
import { marked } from 'marked';
import { describe, expect, it } from 'vitest';
import { caution } from '../../src/report/caution.js';
import { markdownSummary } from '../../src/report/markdown.js';
import { markdownText } from '../../src/report/markdown_text.js';
import { harmful, hostileNames } from './hostile.js';
import { hostileRun } from './hostile_run.js';
import { metRun, sampleRun, specRun } from './sample_run.js';

/** Rendered by marked, a GitHub Flavored Markdown reader that shares no code with this project. */
const rendered = (text: string): string => marked.parse(text, { gfm: true, async: false });
const tags = (page: string): string[] => [...page.matchAll(/<\/?([a-z0-9]+)/g)].map(([, tag]) => tag);
const count = (page: string, tag: string): number => page.split(`<${tag}>`).length - 1;
const ours = new Set('h2 h3 p table thead tbody tr th td strong details summary ul li sub'.split(' '));

/** The text that a reader sees, entities read and joiners taken out. */
function seen(page: string): string {
  const named: Record<string, string> = { lt: '<', gt: '>', amp: '&', quot: '"' };
  return page
    .replace(/<[^>]*>/g, '')
    .replace(/&(?:#(\d+)|([a-z]+));/g, (_, code, name) =>
      code ? String.fromCodePoint(Number(code)) : named[name],
    )
    .replaceAll('\u2060', '')
    .trim();
}

describe('markdownSummary', () => {
  it('begins with the verdict and what blocks the merge', () => {
    const text = markdownSummary(sampleRun());
    expect(text).toMatch(/^## pawl: merge blocked: 2 broken, 1 unjudged, 3 met\n/);
    expect(text.indexOf('AZ-2')).toBeLessThan(text.indexOf('AZ-1'));
    const page = rendered(text);
    expect(count(page, 'table')).toBe(2);
    expect(count(page, 'tr')).toBe(2 + 6);
    expect(seen(page)).toContain('friction at its lower bound (10 N*m*s/rad), drive 63 % of the way');
    expect(seen(page)).toContain('a plant within the bounds breaks it');
  });

  it('says where the numbers come from, what may be claimed, and the caution', () => {
    const page = seen(rendered(markdownSummary(sampleRun())));
    expect(page).toContain('AZ-2: 9 of 1,000 independent plants failed');
    expect(page).toContain('image firmware/azimuth.elf (SHA-256 9f3c2a17b04e), 1,108 plants tried, seed 11');
    expect(page).toContain(caution.replace("'", "'"));
  });

  it('folds away what is met, and is short then', () => {
    const text = markdownSummary(metRun());
    expect(text).toContain('## pawl: merge may go through: 3 requirements met');
    expect(text).toContain('<details><summary>3 requirements met</summary>');
    expect(text.length).toBeLessThan(2000);
  });

  it('says which specs could not be run and why', () => {
    const messages = Array.from({ length: 12 }, (_, at) => `a.pawl.yaml:${at}:1: no such symbol`);
    const text = markdownSummary(metRun(), [{ specFile: 'a.pawl.yaml', messages }]);
    expect(text).toContain('merge blocked: 1 spec could not be run, 3 met');
    expect(seen(rendered(text))).toContain('a.pawl.yaml:0:1: no such symbol');
    expect(text).toContain('- and 2 more');
  });

  it('stays below the size of a comment and says what it leaves out', () => {
    const specs = Array.from({ length: 60 }, () => specRun());
    const text = markdownSummary({ version: '1', specs });
    expect(text.length).toBeLessThan(65_536);
    expect(text).toMatch(/\d+ more specs did not fit here/);
    expect(text).toContain(caution.slice(0, 30));
  });

  it.each(Object.entries(hostileNames))('is not harmed by a hostile name: %s', (_, name) => {
    const text = markdownSummary(hostileRun(name), [{ specFile: name, messages: [name] }]);
    expect(text).not.toMatch(harmful);
    const page = rendered(text);
    expect(tags(page).filter((tag) => !ours.has(tag))).toEqual([]);
    expect(count(page, 'tr')).toBe(2 + 4);
    expect(count(page, 'h3')).toBe(2);
    expect(text).not.toMatch(/[@#](?=[\p{L}\d])(?<!&#)/u);
  });
});

describe('markdownText', () => {
  it('shows just the text, whatever it is made of', () => {
    fc.assert(
      fc.property(fc.string({ unit: 'grapheme-ascii' }), (text) => {
        fc.pre(text.trim() !== '' && text === text.trim());
        const page = rendered(markdownText(text));
        expect(tags(page)).toEqual(['p', 'p']);
        expect(seen(page)).toBe(text);
      }),
      { seed: 21, numRuns: 1000 },
    );
  });

  it.each([
    '- a',
    '1. a',
    '# a',
    '> a',
    '=== ',
    '    code',
    '```',
    '[x]: y',
    'www.example.com',
    'http://a.b',
  ])('gives %j no structure', (text) => {
    expect(tags(rendered(`${markdownText(text)}`))).toEqual(['p', 'p']);
    expect(tags(rendered(`- ${markdownText(text)}`))).toEqual(['ul', 'li', 'li', 'ul']);
  });
});
