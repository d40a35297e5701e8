import { describe, expect, it } from 'vitest';
import { elsewhere, plotFigures } from '../../src/report/html/figures.js';
import { html } from '../../src/report/html/markup.js';
import { twoColumns } from '../../src/report/html/two_columns.js';
import { isLatchedShown, limitStrip } from '../../src/report/plot/limit_strip.js';
import { gainPlot, openLoopPlot, samplePlots } from './sample_plots.js';
import { requirement, value } from './sample_run.js';
import { comparison, degrees, margin } from './sample_since_latched.js';

const [plots] = samplePlots.specs;
const idOf = (name: string): string => `id-${name}`;
const captions = (name: string, of = plots): string[] =>
  plotFigures({ name }, 'r', of).map(({ markup }) =>
    markup.text.replace(/.*<figcaption>/, '').replace(/<[^>]*>/g, ''),
  );

describe('a requirement without a picture of its own', () => {
  it('leads to the one with which it is drawn', () => {
    const [link, ...rest] = elsewhere({ name: 'AZ-1' }, plots, idOf).map(({ text }) => text);
    expect(rest).toEqual([]);
    expect(link).toContain('<a href="#id-AZ-2"><bdi>AZ-2</bdi></a>: <bdi>angle in slew</bdi>');
    expect(elsewhere({ name: 'AZ-2' }, plots, idOf)).toEqual([]);
  });

  it('says why there is none', () => {
    const said = elsewhere({ name: 'AZ-7' }, plots, idOf).map(({ text }) => text);
    expect(said.join('')).toContain('The loop opened at duty and mirror is a matrix.');
  });
});

describe('captions', () => {
  it('name every curve, the latched coefficients among them only where they are drawn', () => {
    expect(captions('AZ-2')[0]).toContain('latched coefficients');
    expect(captions('AZ-6')[0]).not.toContain('latched');
    const [sensitivity] = captions('AZ-7');
    for (const words of ['Sensitivity |1/(1 + L)| at duty', '12 plants', 'worst of AZ-7', 'worst of AZ-6'])
      expect(sensitivity).toContain(words);
  });

  it('say what the sizes and loci of a signal that changes several times are', () => {
    const lifted = { changes: 10, nominal: [], worst: [], marks: [] };
    const of = {
      ...plots,
      loops: [{ ...openLoopPlot, lifted }],
      gains: (['any_signal', 'sine'] as const).map((meaning) => ({ ...gainPlot, changes: 10, meaning })),
    };
    const [open, loci] = captions('AZ-6', of);
    expect(open).toContain('duty changes 10 times in a cycle of all controllers');
    expect(open).toContain('margins are read from the loci, not from here');
    expect(loci).toContain('The 10 eigenvalues of the lifted loop');
    const [any, sine] = captions('AZ-7', of);
    expect(any).toContain('largest singular value');
    expect(sine).toContain('root-mean-square of all that a sine makes');
  });
});

describe('twoColumns', () => {
  const figure = (name: string, height: number) => ({ markup: html`<p>${name}</p>`, height });

  it('puts each figure where there is more room, and keeps their order on a narrow screen', () => {
    const { text } = twoColumns(figure('left', 100), figure('right', 450), [
      figure('a', 300),
      figure('b', 300),
      figure('c', 300),
    ]);
    const columns = text.split('<div class="stack">').slice(1);
    expect(columns.map((column) => [...column.matchAll(/<p>(\w+)/g)].map(([, name]) => name))).toEqual([
      ['left', 'a', 'b'],
      ['right', 'c'],
    ]);
    expect([...text.matchAll(/order:(\d)"><p>(\w)/g)].map(([, at, name]) => name + at)).toEqual([
      'a1',
      'b2',
      'c3',
    ]);
  });
});

describe('the latched coefficients on the line of the limit', () => {
  it('stand as a square where they give another number, told in words too', () => {
    const text = limitStrip(margin(), 'id').text;
    const place = (pattern: RegExp): number => Number(text.match(pattern)![1]);
    // 53 degrees with the latched coefficients, 44 with today's.
    expect(place(/latched-point" x="([\d.]+)/) + 5).toBeGreaterThan(place(/worst-point" d="M([\d.]+)/));
    expect(text).toContain('worst with the latched coefficients 53 deg');
  });

  it('are left out without a reference, where nothing differs, and where there is no number', () => {
    expect(isLatchedShown(requirement())).toBe(false);
    expect(isLatchedShown({ comparison: comparison({ today: degrees(53, 0.3) }) })).toBe(false);
    const unformed = { result: { kind: 'unformed', why: 'x' } as const, headroom: undefined };
    expect(isLatchedShown({ comparison: comparison({ rerun: unformed }) })).toBe(false);
    const infinite = { result: value(Number.POSITIVE_INFINITY), headroom: 1 };
    expect(limitStrip(margin({ rerun: infinite }), 'id').text).not.toMatch(/latched-point|NaN|Infinity/);
  });
});
