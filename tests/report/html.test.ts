import fc from 'fast-check';
import { describe, expect, it } from 'vitest';
import { caution } from '../../src/report/caution.js';
import { html } from '../../src/report/html/markup.js';
import { htmlReport } from '../../src/report/html.js';
import type { SpecPlots } from '../../src/report/plots.js';
import { harmful, hostileNames } from './hostile.js';
import { hostileRun } from './hostile_run.js';
import { gainPlot, openLoopPlot, plane, samplePlots, tracePlot } from './sample_plots.js';
import { requirement, sampleRun } from './sample_run.js';

const count = (text: string, part: string): number => text.split(part).length - 1;

describe('htmlReport', () => {
  const text = htmlReport(sampleRun(), { plots: samplePlots });

  it('has no scripts, fetches nothing and says so to the browser', () => {
    expect(text).not.toMatch(/<script|<link|<img|@import|\bsrc=|\son\w+=|url\((?!#)/i);
    expect(text).toContain(`content="default-src &#39;none&#39;; style-src &#39;unsafe-inline&#39;"`);
  });

  it('gives every id once, and no reference without its id', () => {
    const ids = [...text.matchAll(/\sid="([^"]+)"/g)].map(([, id]) => id);
    expect(new Set(ids).size).toBe(ids.length);
    const references = [...text.matchAll(/(?:href="#|url\(#|aria-labelledby=")([^")]+)/g)].flatMap(
      ([, list]) => list.split(' '),
    );
    expect(references.filter((id) => !ids.includes(id))).toEqual([]);
  });

  it('holds provenance, coefficients, claims, build output and the caution', () => {
    expect(text).toContain('9f3c2a17b04e5d6677889900aabbccddeeff00112233445566778899aabbccdd');
    expect(text).toContain('0x3e99999a');
    expect(text).toContain('firmware/azimuth.c:41');
    expect(text).toContain('built azimuth.elf');
    expect(text).toContain('in 1,000 independent plants none failed');
    expect(text).toContain(caution.replace("'", '&#39;'));
  });

  it('gives a margin in dB beside the plain ratio', () => {
    expect(text).toContain('7.959 dB (a factor of 2.5)');
  });

  it('shows a plot that several requirements share once, with the first', () => {
    expect(count(text, '<strong><bdi>angle</bdi> in <bdi>slew</bdi></strong>')).toBe(1);
    const article = text.split('<article').find((part) => part.includes('s1-r2-h'))!;
    expect(article).toContain('<bdi>angle</bdi> in');
  });

  it('says which specs could not be run, and blocks the merge for it', () => {
    const faults = [{ specFile: 'b.pawl.yaml', messages: ['no such symbol "kq"'] }];
    const failed = htmlReport({ version: '1', specs: [] }, { faults });
    expect(failed).toContain('merge blocked: 1 spec could not be run');
    expect(failed).toContain('no such symbol &quot;kq&quot;');
  });

  it('stays under 2 MB with forty requirements that all have plots', () => {
    const names = Array.from({ length: 40 }, (_, at) => `AZ-${at + 1}`);
    const plots: SpecPlots = {
      traces: names.map((name) => ({ ...tracePlot, requirements: [name] })),
      loops: names.slice(0, 10).map((name) => ({ ...openLoopPlot, requirements: [name] })),
      gains: names.slice(0, 20).map((name) => ({ ...gainPlot, requirements: [name] })),
      planes: names.map((name) => ({ ...plane, requirement: name })),
      undrawn: [],
    };
    const run = sampleRun({ requirements: names.map((name) => requirement({ name })) });
    expect(htmlReport(run, { plots: { specs: [plots] } }).length).toBeLessThan(2e6);
  });

  it.each(Object.entries(hostileNames))('is not harmed by a hostile name: %s', (_, name) => {
    const plots = {
      traces: [
        {
          ...tracePlot,
          requirements: [name],
          signal: name,
          scenario: name,
          unit: { ...tracePlot.unit, text: name },
          fences: tracePlot.fences.map((fence) => ({ ...fence, requirement: name })),
        },
      ],
      loops: [
        {
          ...openLoopPlot,
          requirements: [name],
          at: name,
          margins: openLoopPlot.margins.map((margin) => ({ ...margin, requirement: name, text: name })),
          modulus: { ...openLoopPlot.modulus!, requirement: name, text: name },
        },
      ],
      gains: [
        {
          ...gainPlot,
          requirements: [name, name],
          at: name,
          worst: gainPlot.worst.map((one) => ({ ...one, requirements: [name] })),
          fences: gainPlot.fences.map((fence) => ({ ...fence, requirement: name })),
          tightest: gainPlot.tightest.map((place) => ({ ...place, requirement: name, text: name })),
        },
      ],
      undrawn: [{ requirements: [name], why: name }],
      planes: [
        {
          ...plane,
          requirement: name,
          x: { ...plane.x, parameter: name },
          y: { ...plane.y, parameter: name },
        },
      ],
    };
    const page = htmlReport(hostileRun(name), {
      plots: { specs: [plots] },
      faults: [{ specFile: name, messages: [name] }],
    });
    const plain = htmlReport(hostileRun('plain'), {
      plots: { specs: [plots] },
      faults: [{ specFile: 'a', messages: ['b'] }],
    });
    expect(page).not.toMatch(harmful);
    expect(page).not.toContain('<script');
    expect(count(page, '<article')).toBe(count(plain, '<article'));
  });
});

describe('the template', () => {
  it('escapes every text, in elements and in attributes', () => {
    fc.assert(
      fc.property(fc.string({ unit: 'binary' }), (name) => {
        const { text } = html`<p title="${name}">${name}</p>`;
        const inner = text.slice('<p title="'.length, -'</p>'.length);
        expect(count(inner, '"')).toBe(1);
        expect(count(inner, '<')).toBe(0);
        expect(count(inner, '>')).toBe(1);
        expect(text).not.toMatch(harmful);
      }),
      { seed: 41, numRuns: 500 },
    );
  });

  it('takes markup, lists, numbers and nothing as they are meant', () => {
    expect(html`${html`<b>x</b>`}${['a', html`<i/>`, 1]}${undefined}`.text).toBe('<b>x</b>a<i/>1');
    expect(html`${'5 %'}`.text).toBe('5\u00a0%');
  });
});
