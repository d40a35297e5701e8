import type { RequirementRun } from '../../verdict/run.js';
import { counted } from '../format_value.js';
import { locusDrawing } from '../plot/locus_plot.js';
import { openLoopDrawing } from '../plot/open_loop_plot.js';
import { planeDrawing } from '../plot/plane_plot.js';
import { traceDrawing } from '../plot/trace_plot.js';
import type { OpenLoopPlot, SpecPlots, TracePlot } from '../plots.js';
import { html, type Markup } from './markup.js';

/** The plots that belong to a requirement, each a figure; those that several share stand with the first of them. */
export function plotFigures(
  requirement: Pick<RequirementRun, 'name'>,
  id: string,
  plots: SpecPlots | undefined,
): Markup[] {
  if (!plots) return [];
  const isFirst = ({ requirements }: { requirements: string[] }): boolean =>
    requirements[0] === requirement.name;
  return [
    ...plots.traces.filter(isFirst).map((plot, at) => traceFigure(plot, `${id}-t${at}`)),
    ...plots.loops.filter(isFirst).flatMap((plot, at) => loopFigures(plot, `${id}-l${at}`)),
    ...plots.planes
      .filter((plane) => plane.requirement === requirement.name)
      .map((plane, at) => figure(planeDrawing(plane, `${id}-p${at}`), planeCaption)),
  ];
}

function traceFigure(plot: TracePlot, id: string): Markup {
  const target = plot.target && html`<span class="key target-key">target</span>`;
  const caption = html`<strong><bdi>${plot.signal}</bdi> in <bdi>${plot.scenario}</bdi></strong> <span class="key band-key">${counted(plot.plants, 'plant')}</span> <span class="key nominal-line-key">nominal</span> <span class="key worst-line-key">worst of ${plot.requirements[0]}</span> ${target}`;
  return figure(traceDrawing(plot, id), caption);
}

function loopFigures(plot: OpenLoopPlot, id: string): Markup[] {
  const keys = html`<span class="key nominal-line-key">nominal</span> <span class="key worst-line-key">worst of ${plot.requirements[0]}</span>`;
  const at = html`<bdi>${plot.at}</bdi>`;
  return [
    figure(openLoopDrawing(plot, `${id}-f`), html`<strong>Open loop at ${at}</strong> ${keys}`),
    figure(
      locusDrawing(plot, `${id}-c`),
      html`<strong>Its locus</strong> ${keys} The cross is −1, the thin circle has radius one.`,
    ),
  ];
}

const planeCaption = html`<strong>Headroom over two parameters, all others nominal</strong> <span class="key nominal-key">nominal plant</span> <span class="key worst-key">worst plant</span>`;

function figure(drawing: Markup, caption: Markup): Markup {
  return html`<figure class="plot">${drawing}<figcaption>${caption}</figcaption></figure>`;
}
