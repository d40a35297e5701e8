import { marked } from 'marked';
import { describe, expect, it } from 'vitest';
import type { StoredElement, StoredRemark } from '../../src/firmware/coefficient.js';
import { annotationsOf } from '../../src/report/annotations.js';
import { htmlReport } from '../../src/report/html.js';
import { junitOf } from '../../src/report/junit.js';
import { markdownSummary } from '../../src/report/markdown.js';
import { originWord } from '../../src/report/origin_in_words.js';
import { remarksInWords, warningsInWords } from '../../src/report/remarks_in_words.js';
import { runJson } from '../../src/report/run_json.js';
import { terminalReport } from '../../src/report/terminal.js';
import type { CoefficientRead, Provenance } from '../../src/verdict/run.js';
import { harmful, hostileNames } from './hostile.js';
import { notch, requirement, sampleRun, specRun } from './sample_run.js';

const place = requirement().place;

/** Rendered by marked, a GitHub Flavored Markdown reader that shares no code with this project. */
function rendered(text: string): string {
  return marked
    .parse(text, { gfm: true, async: false })
    .replaceAll('&#58;', ':')
    .replaceAll(/&#4([01]);/g, (_, n) => '()'[Number(n)]);
}

/** The coefficient `gain` with these remarks on its elements, stored as 0x0, 0x1 … */
function odd(
  remarks: (StoredRemark | undefined)[],
  name = 'gain',
  shape = [remarks.length],
): CoefficientRead {
  const elements = remarks.map(
    (remark, at): StoredElement => ({
      value: 0,
      stored: `0x${at}`,
      address: undefined,
      ...(remark && { remark }),
    }),
  );
  return { name, place, unit: undefined, coefficient: { ...notch, elements, shape } };
}

describe('remarksInWords', () => {
  it('says nothing of numbers as they should be', () => {
    expect(remarksInWords(specRun().coefficients)).toEqual([]);
  });

  const single: [StoredRemark, string][] = [
    ['not_a_number', 'warning: gain is not a number (stored 0x0)'],
    ['infinite', 'warning: gain is infinite (stored 0x0)'],
    ['denormal', 'warning: gain is denormal, smaller than its format holds in full precision (stored 0x0)'],
    ['erased', 'warning: gain is the pattern of erased flash, all ones (stored 0x0)'],
  ];
  it.each(single)('says what is odd about one number: %s', (remark, line) => {
    expect(remarksInWords([odd([remark], 'gain', [])])).toEqual([line]);
  });

  it('takes the numbers of a table together, and names the first', () => {
    expect(remarksInWords([odd([undefined, 'infinite', 'denormal', 'infinite'], 'taps', [2, 2])])).toEqual([
      'warning: 2 numbers of taps are infinite (taps[0][1], stored 0x1)',
      'warning: taps[1][0] is denormal, smaller than its format holds in full precision (stored 0x2)',
    ]);
    expect(remarksInWords([odd(['erased', 'erased'])])).toEqual([
      'warning: all 2 numbers of gain are the pattern of erased flash, all ones (gain[0], stored 0x0)',
    ]);
  });

  it('does not fill the screen', () => {
    const many = Array.from({ length: 14 }, (_, at) => odd(['erased'], `g${at}`));
    expect(remarksInWords(many)).toHaveLength(11);
    expect(remarksInWords(many).at(-1)).toBe('warning: and 4 more warnings');
  });

  it.each(Object.entries(hostileNames))('is not harmed by a hostile name: %s', (_, name) => {
    const lines = remarksInWords([odd(['infinite', undefined], name)]);
    expect(lines).toHaveLength(1);
    expect(lines[0]).not.toMatch(harmful);
  });
});

describe('a requirement that guards nothing', () => {
  const idle = (name: string) =>
    requirement({ name, guardsNothing: "'angle' never moves in scenario 'slew'" });

  it('is named in every report, at its line in the spec, and lets the merge through', () => {
    const run = { version: '0.1.0', specs: [specRun({ requirements: [idle('AZ-9')] })] };
    const said = "AZ-9 guards nothing: 'angle' never moves in scenario 'slew'";
    expect(warningsInWords(run.specs[0])).toEqual([`warning: ${said}`]);
    expect(terminalReport(run, { colour: false, width: 200 })).toContain(`warning: ${said}`);
    expect(terminalReport(run, { colour: false, width: 200 })).toContain('merge may go through');
    expect(junitOf(run)).toMatch(/<property name="warnings" value="[^"]*AZ-9 guards nothing/);
    expect(markdownSummary(run)).toContain('AZ-9 guards nothing');
    expect(htmlReport(run)).toContain('AZ-9 guards nothing');
    expect(JSON.parse(runJson(run)).specs[0].requirements[0].guards_nothing).toContain('never moves');
    expect(annotationsOf(run)).toMatchObject([{ level: 'warning', title: 'AZ-9 guards nothing' }]);
  });

  it.each(Object.entries(hostileNames))('does no harm by a hostile name: %s', (_, name) => {
    const [line] = warningsInWords(specRun({ coefficients: [], requirements: [idle(name)] }));
    expect(line).not.toMatch(harmful);
    expect(line).not.toContain('\n');
  });

  it('does not fill the screen', () => {
    const requirements = Array.from({ length: 14 }, (_, at) => idle(`R${at}`));
    expect(warningsInWords(specRun({ coefficients: [], requirements }))).toHaveLength(11);
  });
});

describe('a warning', () => {
  const run = sampleRun({ coefficients: [odd(['not_a_number'], 'gain', [])] });
  const line = /warning: gain is not a number \(stored 0x0\)/;

  it('stands in the reports on the terminal, for a comment, for a browser and for a CI server', () => {
    expect(terminalReport(run, { colour: false, width: 100 })).toMatch(line);
    expect(rendered(markdownSummary(run))).toMatch(line);
    expect(htmlReport(run)).toMatch(line);
    expect(junitOf(run)).toMatch(line);
  });

  it('stands nowhere where there is nothing to warn of', () => {
    const quiet = sampleRun();
    for (const text of [
      terminalReport(quiet, { colour: false, width: 100 }),
      rendered(markdownSummary(quiet)),
      htmlReport(quiet),
      junitOf(quiet),
    ])
      expect(text).not.toContain('warning:');
  });
});

describe('what holds the numbers', () => {
  const provenance = specRun().provenance!;
  const of = (changes: Partial<Provenance>) => sampleRun({ provenance: { ...provenance, ...changes } });

  const kinds: [NonNullable<Provenance['kind']>, string][] = [
    ['elf', 'image'],
    ['intel_hex', 'Intel HEX image'],
    ['s_record', 'S-record image'],
    ['raw', 'raw image'],
    ['source', 'source'],
    ['command', 'output of'],
  ];
  it.each(kinds)('is said in every report: %s', (kind, word) => {
    const run = of({ kind, image: 'gains' });
    expect(originWord({ ...provenance, kind })).toBe(word);
    expect(terminalReport(run, { colour: false, width: 100 })).toContain(
      `\n${word} gains (SHA-256 9f3c2a17b04e)`,
    );
    expect(rendered(markdownSummary(run))).toContain(`, ${word} gains (SHA-256`);
    expect(htmlReport(run)).toContain(`<dt>${word}</dt>`);
    expect(JSON.parse(runJson(run)).specs[0].provenance).toMatchObject({ kind, image: 'gains' });
  });

  it('names the file that gave the names', () => {
    const run = of({ kind: 'intel_hex', symbols: { image: 'a.elf', sha256: 'ab' } });
    expect(terminalReport(run, { colour: false, width: 100 })).toContain(', names from a.elf');
    expect(htmlReport(run)).toContain('<dt>names from</dt>');
    expect(junitOf(run)).toContain('<property name="names from" value="a.elf"');
    expect(JSON.parse(runJson(run)).specs[0].provenance.symbols).toEqual({ image: 'a.elf', sha256: 'ab' });
  });

  it('gives the command that printed them as it is written', () => {
    const image = '/opt/node print-gains.mjs';
    expect(JSON.parse(runJson(of({ kind: 'command', image }))).specs[0].provenance.image).toBe(image);
  });
});
