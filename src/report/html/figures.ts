import type { RequirementRun } from '../../verdict/run.js';
import { counted } from '../format_value.js';
import { gainDrawing, responseNames, worstClass } from '../plot/gain_plot.js';
import { locusDrawing } from '../plot/locus_plot.js';
import { openLoopDrawing } from '../plot/open_loop_plot.js';
import { planeDrawing } from '../plot/plane_plot.js';
import { traceDrawing } from '../plot/trace_plot.js';
import type { GainPlot, OpenLoopPlot, SpecPlots, TracePlot } from '../plots.js';
import { html, type Markup } from './markup.js';

/** A figure of the page, and how tall it is beside others, px at the width of a drawing. */
export interface Figure {
  markup: Markup;
  height: number;
}

/** The plots that belong to a requirement, each a figure; those that several share stand with the first of them. */
export function plotFigures(
  requirement: Pick<RequirementRun, 'name'>,
  id: string,
  plots: SpecPlots | undefined,
): Figure[] {
  if (!plots) return [];
  const isFirst = ({ requirements }: { requirements: string[] }): boolean =>
    requirements[0] === requirement.name;
  return [
    ...plots.traces.filter(isFirst).map((plot, at) => traceFigure(plot, `${id}-t${at}`)),
    ...plots.loops.filter(isFirst).flatMap((plot, at) => loopFigures(plot, `${id}-l${at}`)),
    ...plots.gains.filter(isFirst).map((plot, at) => gainFigure(plot, `${id}-g${at}`)),
    ...plots.planes
      .filter((plane) => plane.requirement === requirement.name)
      .map((plane, at) => figure(planeDrawing(plane, `${id}-p${at}`), planeCaption)),
  ];
}

/** Figures on which a requirement is drawn that stand with another one, as links to it; and why there are none. */
export function elsewhere(
  { name }: Pick<RequirementRun, 'name'>,
  plots: SpecPlots | undefined,
  idOf: (name: string) => string | undefined,
): Markup[] {
  if (!plots) return [];
  const shared = [
    ...plots.traces.map((plot) => ({ ...plot, title: `${plot.signal} in ${plot.scenario}` })),
    ...plots.loops.map((plot) => ({ ...plot, title: `the open loop at ${plot.at}` })),
    ...plots.gains.map((plot) => ({ ...plot, title: gainTitle(plot) })),
  ].filter(({ requirements }) => requirements.indexOf(name) > 0);
  const links = shared.map(
    ({ requirements: [first], title }) =>
      html`<p class="about">Drawn with <a href="#${idOf(first) ?? ''}"><bdi>${first}</bdi></a>: <bdi>${title}</bdi>.</p>`,
  );
  const undrawn = plots.undrawn
    .filter(({ requirements }) => requirements[0] === name)
    .map(({ why }) => html`<p class="about">${why}</p>`);
  return [...links, ...undrawn];
}

function traceFigure(plot: TracePlot, id: string): Figure {
  const target = plot.target && html`<span class="key target-key">target</span>`;
  const caption = html`<strong><bdi>${plot.signal}</bdi> in <bdi>${plot.scenario}</bdi></strong> <span class="key band-key">${counted(plot.plants, 'plant')}</span> ${lineKeys(plot.requirements[0], plot.latched !== undefined)} ${target}`;
  return figure(traceDrawing(plot, id), caption);
}

function loopFigures(plot: OpenLoopPlot, id: string): Figure[] {
  const keys = lineKeys(plot.requirements[0], plot.latched !== undefined);
  const at = html`<bdi>${plot.at}</bdi>`;
  const { lifted } = plot;
  const ofWave =
    lifted &&
    html` <bdi>${plot.at}</bdi> changes ${lifted.changes} times in a cycle of all controllers. Drawn is what is seen of the loop at one frequency; a wave makes other frequencies too, so that margins are read from the loci, not from here.`;
  const ofLoci = lifted
    ? html`The ${lifted.changes} eigenvalues of the lifted loop over frequencies of either sign.`
    : undefined;
  return [
    figure(openLoopDrawing(plot, `${id}-f`), html`<strong>Open loop at ${at}</strong> ${keys}${ofWave}`),
    figure(
      locusDrawing(plot, `${id}-c`),
      html`<strong>${lifted ? 'Loci' : 'Locus'} of the open loop at ${at}</strong> ${keys} ${ofLoci} The cross is −1, the thin circle has radius one.`,
    ),
  ];
}

function gainFigure(plot: GainPlot, id: string): Figure {
  const { name, formula } = responseNames[plot.response];
  const band =
    plot.plants > 0 ? html`<span class="key band-key">${counted(plot.plants, 'plant')}</span>` : undefined;
  const worst = plot.worst.map(
    ({ requirements }, at) =>
      html` <span class="key ${worstClass(at).split(' ').at(-1)!}-line-key">worst of ${requirements.join(' and ')}</span>`,
  );
  const caption = html`<strong>${name} ${formula} at <bdi>${plot.at}</bdi></strong> ${band} <span class="key nominal-line-key">nominal</span>${plot.latched && latchedKey}${worst} <span class="key ring-key">where the worst plant is tightest</span> ${meaningOf(plot)}`;
  return figure(gainDrawing(plot, id), caption);
}

/** What a size is, where it is not simply that of the response. */
function meaningOf({ meaning, changes, response }: GainPlot): Markup | undefined {
  if (meaning === 'response') return undefined;
  const several = `What is opened changes ${changes} times in a cycle of all controllers:`;
  if (meaning === 'any_signal') {
    return html`${several} drawn is the largest singular value, the most that any signal of that frequency grows.`;
  }
  return response === 'loop'
    ? html`${several} drawn is what is seen of the loop at one frequency.`
    : html`${several} drawn is the root-mean-square of all that a sine makes, over that of the sine.`;
}

function gainTitle({ response, at }: GainPlot): string {
  return `${responseNames[response].name.toLowerCase()} at ${at}`;
}

const latchedKey = html` <span class="key latched-line-key">latched coefficients</span>`;

function lineKeys(first: string, isLatched: boolean): Markup {
  return html`<span class="key nominal-line-key">nominal</span>${isLatched ? latchedKey : undefined} <span class="key worst-line-key">worst of <bdi>${first}</bdi></span>`;
}

const planeCaption = html`<strong>Headroom over two parameters, all others nominal</strong> <span class="key nominal-key">nominal plant</span> <span class="key worst-key">worst plant</span>`;

const captionHeight = 50;

function figure(drawing: Markup, caption: Markup): Figure {
  const [, height] = / viewBox="0 0 \d+ (\d+)"/.exec(drawing.text) ?? [];
  return {
    markup: html`<figure class="plot">${drawing}<figcaption>${caption}</figcaption></figure>`,
    height: Number(height) + captionHeight,
  };
}
