import { describe, expect, it } from 'vitest';
import { requirementArticle } from '../../src/report/html/requirement_article.js';
import { markdownSummary } from '../../src/report/markdown.js';
import { measureInWords } from '../../src/report/requirement_in_words.js';
import { statementInWords } from '../../src/report/statement_in_words.js';
import { terminalReport } from '../../src/report/terminal.js';
import { smallSpecOf } from '../small_loop.js';
import { requirement, sampleRun, specRun } from './sample_run.js';

/** The statement of a requirement as the spec reader gives it. */
function said(holds: string) {
  const { requirements } = smallSpecOf({
    inputs: 'u: { unit: m }',
    plant: 'y: { lag: 1 s, of: u, unit: m }',
    scenarios: 'run: { lasts: 10 s, inputs: { u: { step: 1 m, at: 1 s } } }',
    requirements: [`{ name: R, in: run, measure: over_time, at_least: 0, holds: ${holds} }`],
  });
  return requirements[0].statement!;
}

describe('a statement over time in words', () => {
  it.each([
    ['{ that: y < 300 mm, scale: 1 m }', 'y < 300 mm'],
    ['{ throughout: y   <  2 m, scale: 1 m }', 'throughout: y < 2 m'],
    ['{ throughout: y > 0.5 m, from: 2 s, scale: 1 m }', 'from 2 s on throughout: y > 0.5 m'],
    ['{ at_some_time: y > 0.5 m, to: 1500 ms, scale: 1 m }', 'from 0 to 1.5 s at some time: y > 0.5 m'],
    [
      '{ holds: y < 1 m, holds_up_to: y > 0.5 m, from: 1 s, to: 3 s, scale: 1 m }',
      'y < 1 m, up to a time from 1 to 3 s at which y > 0.5 m',
    ],
    [
      '{ when: u > 0 m, holds: { throughout: y >= 0 m }, scale: 1 m }',
      'when u > 0 m, then (throughout: y >= 0 m)',
    ],
    [
      '{ all_of: [y < 1 m, { one_of: [u > 0 m, y > -1 m] }], scale: 1 m }',
      'y < 1 m and (u > 0 m or y > -1 m)',
    ],
  ])('%s', (holds, words) => {
    expect(statementInWords(said(holds))).toBe(words);
  });

  const one = requirement({
    ...{ name: 'T-1', measure: 'over_time', signals: {}, scenario: 'run' },
    statement: said('{ throughout: y < 2 m, from: 2 s, scale: 1 m }'),
    verdict: { kind: 'broken', headroom: -0.1, why: 'a plant within the bounds breaks it' },
  });

  it('stands for its signals wherever the measure is told', () => {
    expect(measureInWords(one)).toBe('over time in run: from 2 s on throughout: y < 2 m');
    const run = sampleRun({ requirements: [one] });
    expect(terminalReport(run, { colour: false, width: 100 })).toContain('from 2 s on throughout: y < 2 m');
    expect(markdownSummary(run)).toContain('throughout');
    expect(requirementArticle(one, 'r', specRun(), undefined).text).toContain('throughout: y &lt; 2 m');
  });
});
