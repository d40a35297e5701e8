import { scaleLinear } from 'd3-scale';
import { counted, formatNumber, unitText } from '../format_value.js';
import { html, type Markup } from '../html/markup.js';
import { oneLine, shortened } from '../plain_text.js';
import type { Fence, TracePlot } from '../plots.js';
import { type FenceLine, fenceLines } from './fence_lines.js';
import { axisBelow, axisLeft, type Box, drawing, extentAround } from './frame.js';
import { latchedLabel } from './latched_label.js';
import { bandBetween, type Point, pathThrough, px } from './shape.js';

const height = 290;
const box: Box = { left: 52, right: 462, top: 26, bottom: 250 };
const slices = 36;

interface Scales {
  x: (time: number) => number;
  /** From SI. */
  y: (value: number) => number;
  shown: (value: number) => string;
}

/** A signal over time: many plants as a band, the nominal and the worst plant, the target, limits as fences. */
export function traceDrawing(plot: TracePlot, id: string): Markup {
  const written = { unit: plot.unit, inDecibels: false };
  const scale = plot.unit.scale;
  const levels = plot.fences.flatMap(({ from, to }) => [from.value, to.value]);
  const matter = [plot.nominal, plot.latched ?? [], plot.target ?? [], levels]
    .flat()
    .map((value) => value / scale);
  const others = [plot.low, plot.high, plot.worst].flat().map((value) => value / scale);
  const y = scaleLinear(extentAround(matter, others), [box.bottom, box.top]);
  const x = scaleLinear([plot.times[0] ?? 0, plot.times.at(-1) ?? 1], [box.left, box.right]);
  const unit = unitText(written);
  const scales: Scales = {
    x,
    y: (value) => y(value / scale),
    shown: (value) => `${formatNumber(value / scale)} ${unit}`.trimEnd(),
  };
  const pointsOf = (values: readonly number[]): Point[] =>
    values.map((value, at) => [x(plot.times[at]), scales.y(value)]);
  const lineOf = ({ from, to, ...others }: Fence): FenceLine => ({
    ...others,
    from: [x(from.time), scales.y(from.value)],
    to: [x(to.time), scales.y(to.value)],
  });
  const marksX = x.ticks(6).map((at) => ({ at: x(at), text: formatNumber(at) }));
  const marksY = y.ticks(5).map((at) => ({ at: y(at), text: formatNumber(at) }));
  const name = `${shortened(oneLine(plot.signal), 40)}${unit === '' ? '' : ` (${unit})`}`;
  return drawing(id, height, `${plot.signal} in ${plot.scenario}`, describe(plot, scales), [
    axisLeft(box, marksY, name),
    axisBelow(box, marksX, 'time (s)'),
    html`<clipPath id="${id}-c"><rect x="${box.left}" y="${box.top}" width="${box.right - box.left}" height="${box.bottom - box.top}"/></clipPath><g clip-path="url(#${id}-c)">${curves(plot, scales)}</g>`,
    fenceLines(plot.fences.map(lineOf), box),
    latchedLabel(plot.latched && pointsOf(plot.latched), pointsOf(plot.nominal), box),
    hoverSlices(plot, scales),
  ]);
}

function curves(plot: TracePlot, { x, y }: Scales): Markup {
  const pointsOf = (values: readonly number[]): Point[] =>
    values.map((value, at) => [x(plot.times[at]), y(value)]);
  const path = (className: string, values: readonly number[] | undefined): Markup | undefined =>
    values && html`<path class="${className}" d="${pathThrough(pointsOf(values))}"/>`;
  const band = bandBetween(pointsOf(plot.high), pointsOf(plot.low));
  return html`<path class="band" d="${band}"/>${path('target', plot.target)}${path('latched', plot.latched)}${path('nominal', plot.nominal)}${path('worst', plot.worst)}`;
}

/** Invisible slices over the plot whose tooltips give the values there; they need no script. */
function hoverSlices(plot: TracePlot, { x, shown }: Scales): Markup {
  const places = plot.times.length === 0 ? [] : sampled(plot.times.length, slices);
  const width = (box.right - box.left) / Math.max(1, places.length);
  const rows = places.map((i) => {
    const latched = plot.latched ? `, latched ${shown(plot.latched[i])}` : '';
    const values = `at ${formatNumber(plot.times[i])} s: nominal ${shown(plot.nominal[i])}${latched}, worst ${shown(plot.worst[i])}, ${counted(plot.plants, 'plant')} ${shown(plot.low[i])} to ${shown(plot.high[i])}`;
    return html`<rect x="${px(x(plot.times[i]) - width / 2)}" y="${box.top}" width="${px(width)}" height="${box.bottom - box.top}"><title>${values}</title></rect>`;
  });
  return html`<g class="hover">${rows}</g>`;
}

function describe(plot: TracePlot, { shown }: Scales): string {
  const last = plot.times.length - 1;
  const said = (whose: string, values: readonly number[]): string => {
    const peak = values.reduce((most, value) => (Math.abs(value) > Math.abs(most) ? value : most), 0);
    return `${whose} largest value is ${shown(peak)} and it ends at ${shown(values[last])}`;
  };
  const curves = [
    said("The nominal plant's", plot.nominal),
    ...(plot.latched ? [said("with the latched coefficients the nominal plant's", plot.latched)] : []),
    said("the worst plant's", plot.worst),
  ];
  const limits = plot.fences.map((fence) => limitText(fence, shown)).join('; ');
  return `${curves.join('; ')}. Limits drawn: ${limits || 'none'}.`;
}

function limitText({ requirement, from, to, forbidden }: Fence, shown: Scales['shown']): string {
  const level = from.value === to.value ? shown(from.value) : `${shown(from.value)} to ${shown(to.value)}`;
  const times = `from ${formatNumber(from.time)} to ${formatNumber(to.time)} s`;
  return `${requirement} not ${forbidden} ${level} ${times}`;
}

/** Evenly spread places among so many, first and last always, at most `most`. */
export function sampled(count: number, most: number): number[] {
  const steps = Math.min(count, most);
  if (steps <= 1) return count > 0 ? [0] : [];
  return Array.from({ length: steps }, (_, at) => Math.round((at * (count - 1)) / (steps - 1)));
}
