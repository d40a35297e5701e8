import { describe, expect, it } from 'vitest';
import { dataTable, termList } from '../../src/report/html/data_table.js';
import { plotFigures } from '../../src/report/html/figures.js';
import { html } from '../../src/report/html/markup.js';
import { claimsSection, provenanceSection } from '../../src/report/html/provenance.js';
import { requirementArticle } from '../../src/report/html/requirement_article.js';
import { verdictBadge } from '../../src/report/html/sign.js';
import { style } from '../../src/report/html/style.js';
import { summaryTable } from '../../src/report/html/summary.js';
import { gainPlot, openLoopPlot, plane, samplePlots, tracePlot } from './sample_plots.js';
import { plant, requirement, requirements, specRun, value } from './sample_run.js';

/** The text that is seen, blanks as one. */
const seen = (text: string): string =>
  text
    .replace(/<title.*?<\/title>|<desc.*?<\/desc>/g, '')
    .replace(/<[^>]*>/g, ' ')
    .replace(/&#39;/g, "'")
    .replace(/[\s\u00a0]+/g, ' ')
    .trim();

describe('verdictBadge', () => {
  it('is a word with a sign that screen readers leave out', () => {
    for (const kind of ['met', 'broken', 'unjudged'] as const) {
      const { text } = verdictBadge(kind);
      expect(seen(text)).toBe(kind);
      expect(text).toContain('aria-hidden="true"');
    }
    const shapes = (['met', 'broken', 'unjudged'] as const).map(
      (kind) => verdictBadge(kind).text.match(/ d="(.*?)"/)![1],
    );
    expect(new Set(shapes).size).toBe(3);
  });
});

describe('dataTable', () => {
  const { text } = dataTable(
    'Two things',
    ['name', 'size'],
    [
      ['a<b', '1'],
      ['c', '2'],
    ],
    [1],
  );

  it('heads its columns and rows, and says what it shows', () => {
    expect(text).toContain('<caption>Two things</caption>');
    expect(text.match(/<th scope="col"/g)).toHaveLength(2);
    expect(text.match(/<th scope="row"/g)).toHaveLength(2);
    expect(text).toContain('<th scope="row">a&lt;b</th>');
    expect(text.match(/<td class="number">/g)).toHaveLength(2);
  });

  it('can be scrolled by keyboard where it is too wide', () => {
    expect(text).toContain('role="region" aria-label="Two things" tabindex="0"');
  });
});

describe('termList', () => {
  it('leaves out pairs of which nothing is said', () => {
    const { text } = termList([
      ['a', 'x'],
      ['b', undefined],
      ['c', ''],
      ['d', html`<code>y</code>`],
    ]);
    expect(text.match(/<dt>/g)).toHaveLength(2);
    expect(text).toContain('<dt>d</dt><dd><code>y</code></dd>');
  });
});

describe('summaryTable', () => {
  it('has a row for each requirement, blocking ones first, that leads to its article', () => {
    const { text } = summaryTable(specRun(), ({ name }) => `id-${name}`);
    const links = [...text.matchAll(/href="#(id-[^"]+)"/g)].map(([, id]) => id);
    expect(links).toEqual(['id-AZ-2', 'id-AZ-3', 'id-AZ-4', 'id-AZ-1', 'id-AZ-6', 'id-AZ-7']);
    expect(seen(text)).toContain(
      'broken AZ-3 peak deviation of angle at most 30 mrad 21.2 mrad 30.003 mrad -0.01 %',
    );
  });

  it('shortens a name that would fill the table', () => {
    const long = specRun({ requirements: [requirement({ name: 'n'.repeat(500) })] });
    expect(seen(summaryTable(long, () => 'x').text)).toContain(`${'n'.repeat(30)}…${'n'.repeat(29)}`);
  });
});

describe('requirementArticle', () => {
  const article = (one: Parameters<typeof requirementArticle>[0]) =>
    requirementArticle(one, 'r', undefined).text;

  it('says why a requirement blocks, in full', () => {
    expect(seen(article(requirements[1]))).toContain('a plant within the bounds breaks it');
    expect(seen(article(requirements[1]))).toContain('worst longer than 3.8 s: never stays in the band');
    expect(seen(article(requirements[3]))).toContain('worst could not be formed: the signal has no range');
  });

  it('gives reason, evidence, claim and place', () => {
    const text = seen(article(requirement()));
    expect(text).toContain('The image must stay inside the receiver aperture while slewing.');
    expect(text).toContain('evidence tried 1,108 plants');
    expect(text).toContain('claim in 1,000 independent plants none failed');
    expect(text).toContain('specs/heliostat/azimuth.pawl.yaml:58:5');
  });

  it('opens the worst plant of a broken requirement and folds away the others', () => {
    expect(article(requirements[1])).toContain(
      '<details open><summary>Worst plant: friction at its lower bound',
    );
    expect(article(requirement())).toContain('<details><summary>Worst plant: friction');
    expect(article(requirements[5])).toContain('<details><summary>Plant: the nominal plant');
  });

  it('has a row for each parameter, and no table where there are none', () => {
    expect(seen(article(requirement()))).toContain('drive 191.34 N*m 180 63 % of the way to its upper bound');
    const none = { ...plant(value(0.2), 0.2, true), parameters: [] };
    expect(article(requirement({ worst: none }))).not.toContain('<details');
  });

  it('says what a reader should know of a number', () => {
    const noted = plant({ kind: 'value', value: 1, note: 'the closed loop is unstable' }, -1, true);
    expect(seen(article(requirement({ worst: noted })))).toContain('the closed loop is unstable');
  });

  it('tells its side by the look of its edge as well as by colour', () => {
    expect(article(requirement())).toContain('class="requirement met-side"');
    expect(article(requirements[1])).toContain('class="requirement broken-side"');
    for (const look of ['border-left-style:double', 'border-left-style:dashed'])
      expect(style).toContain(look);
  });
});

describe('plotFigures', () => {
  const captions = (name: string, plots = samplePlots.specs[0]) =>
    (
      plotFigures({ name }, 'r', plots)
        .map(({ markup }) => markup.text)
        .join('')
        .match(/<strong>.*?<\/strong>/g) ?? []
    ).map(seen);

  it('stand with the first requirement that they belong to', () => {
    expect(captions('AZ-2')).toEqual(['angle in slew']);
    expect(captions('AZ-1')).toEqual([]);
    expect(captions('AZ-6')).toEqual(['Open loop at duty', 'Locus of the open loop at duty']);
    expect(captions('AZ-3')).toEqual(['Headroom over two parameters, all others nominal']);
  });

  it('are none where there is nothing to draw', () => {
    expect(plotFigures({ name: 'AZ-1' }, 'r', undefined)).toEqual([]);
    expect(
      plotFigures({ name: 'AZ-1' }, 'r', { traces: [], loops: [], gains: [], planes: [], undrawn: [] }),
    ).toEqual([]);
  });

  it('have ids of their own where there are several', () => {
    const plots = {
      traces: [tracePlot, tracePlot],
      loops: [openLoopPlot, openLoopPlot],
      gains: [gainPlot, gainPlot],
      planes: [plane, plane],
      undrawn: [],
    };
    const all = ['AZ-2', 'AZ-6', 'AZ-7', 'AZ-3']
      .flatMap((name) => plotFigures({ name }, 'r', plots))
      .map(({ markup }) => markup.text)
      .join('');
    const ids = [...all.matchAll(/\sid="([^"]+)"/g)].map(([, id]) => id);
    expect(ids.length).toBeGreaterThan(16);
    expect(new Set(ids).size).toBe(ids.length);
  });
});

describe('provenanceSection', () => {
  const section = (changes: Parameters<typeof specRun>[0]) =>
    provenanceSection(specRun(changes), '0.1.0').text;

  it('says image, digest, compiler, build, seed, plants and how to run it again', () => {
    const text = seen(section({}));
    expect(text).toContain('image firmware/azimuth.elf , 48,212 bytes');
    expect(text).toContain('compilers GNU C11 12.2.1 -mcpu=cortex-m4 -O2');
    expect(text).toContain('build make -s -C firmware , 0.83 s');
    expect(text).toContain('1 nominal, 11 with one parameter at a bound, 32 corners');
    expect(text).toContain('step halved 1 time');
    expect(text).toContain('run again pawl check specs/heliostat/azimuth.pawl.yaml');
    expect(text).toContain('What the build printed built azimuth.elf');
  });

  it('says when the build was skipped, and does without an image', () => {
    const skipped = { ...specRun().provenance!, build: undefined, buildSkipped: true };
    expect(seen(section({ provenance: skipped }))).toContain('skipped: the image was taken as it is');
    expect(section({ provenance: undefined })).not.toContain('SHA-256');
    const silent = { ...specRun().provenance!, build: { command: ['make'], seconds: 1, output: ' \n' } };
    expect(section({ provenance: silent })).not.toContain('What the build printed');
  });
});

describe('claimsSection', () => {
  it('gives every statement once, with its confidence, and is left out where there is none', () => {
    const text = seen(claimsSection(specRun())!.text);
    expect(text).toContain('With 95 % confidence, from the independent plants alone');
    expect(text).toContain('AZ-1, AZ-3, AZ-6 : in 1,000 independent plants none failed');
    expect(claimsSection(specRun({ requirements: [requirement({ claim: undefined })] }))).toBeUndefined();
  });
});

describe('the style sheet', () => {
  it('serves dark mode, print and narrow screens, and fetches nothing', () => {
    expect(style).toContain('@media(prefers-color-scheme:dark)');
    expect(style).toContain('@media print');
    expect(style).toContain('@media(max-width:640px)');
    expect(style).not.toMatch(/url\(|@import|</);
  });

  it('has braces in pairs and no variable that is not set', () => {
    expect(style.match(/\{/g)!.length).toBe(style.match(/\}/g)!.length);
    const set = new Set([...style.matchAll(/(--[a-z]+):/g)].map(([, name]) => name));
    const used = new Set([...style.matchAll(/var\((--[a-z]+)\)/g)].map(([, name]) => name));
    expect([...used].filter((name) => !set.has(name))).toEqual([]);
    expect([...set].filter((name) => !used.has(name))).toEqual([]);
  });

  /** Contrast of two colours by the formula of WCAG 2.2 (W3C, 2023): at least 4.5 for text. */
  it.each([0, 1])('has colours that can be read on both of its grounds, look %i', (look) => {
    const block = [...style.matchAll(/:root\{[^}]*\}/g)][look][0];
    const colour = (name: string) => block.match(new RegExp(`--${name}:#([0-9a-f]+)`))![1];
    for (const text of ['ink', 'slate', 'petrol', 'brick']) {
      for (const ground of ['ground', 'sheet']) {
        expect(contrast(colour(text), colour(ground))).toBeGreaterThanOrEqual(4.5);
      }
    }
  });
});

function contrast(a: string, b: string): number {
  const [dark, light] = [luminance(a), luminance(b)].sort((x, y) => x - y);
  return (light + 0.05) / (dark + 0.05);
}

function luminance(colour: string): number {
  const full = colour.length === 3 ? colour.replace(/./g, '$&$&') : colour;
  const [red, green, blue] = [0, 2, 4]
    .map((at) => Number.parseInt(full.slice(at, at + 2), 16) / 255)
    .map((part) => (part <= 0.04045 ? part / 12.92 : ((part + 0.055) / 1.055) ** 2.4));
  return 0.2126 * red + 0.7152 * green + 0.0722 * blue;
}
