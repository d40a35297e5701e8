import { scaleLinear } from 'd3-scale';
import { area } from 'd3-shape';
import { counted, formatNumber, unitText } from '../format_value.js';
import { html, type Markup } from '../html/markup.js';
import { oneLine, shortened } from '../plain_text.js';
import type { Fence, TracePlot } from '../plots.js';
import { axisBelow, axisLeft, type Box, drawing, extentAround, spread } from './frame.js';
import { fencePath, type Point, pathThrough, px, thinned } from './shape.js';

const height = 290;
const box: Box = { left: 52, right: 462, top: 26, bottom: 250 };
/** So many points of a curve are finer than the drawing can show. */
const mostPoints = 220;
const slices = 36;

interface Scales {
  x: (time: number) => number;
  /** From SI. */
  y: (value: number) => number;
  shown: (value: number) => string;
}

const sides: Readonly<Record<Fence['forbidden'], Point>> = {
  above: [0, -1],
  below: [0, 1],
  left: [-1, 0],
  right: [1, 0],
};

/** A signal over time: many plants as a band, the nominal and the worst plant, the target, limits as fences. */
export function traceDrawing(plot: TracePlot, id: string): Markup {
  const written = { unit: plot.unit, inDecibels: false };
  const scale = plot.unit.scale;
  const levels = plot.fences.flatMap(({ from, to }) => [from.value, to.value]);
  const matter = [plot.nominal, plot.target ?? [], levels].flat().map((value) => value / scale);
  const others = [plot.low, plot.high, plot.worst].flat().map((value) => value / scale);
  const y = scaleLinear(extentAround(matter, others), [box.bottom, box.top]);
  const x = scaleLinear([plot.times[0] ?? 0, plot.times.at(-1) ?? 1], [box.left, box.right]);
  const unit = unitText(written);
  const scales: Scales = {
    x,
    y: (value) => y(value / scale),
    shown: (value) => `${formatNumber(value / scale)} ${unit}`.trimEnd(),
  };
  const marksX = x.ticks(6).map((at) => ({ at: x(at), text: formatNumber(at) }));
  const marksY = y.ticks(5).map((at) => ({ at: y(at), text: formatNumber(at) }));
  const name = `${shortened(oneLine(plot.signal), 40)}${unit === '' ? '' : ` (${unit})`}`;
  return drawing(id, height, `${plot.signal} in ${plot.scenario}`, describe(plot, scales), [
    axisLeft(box, marksY, name),
    axisBelow(box, marksX, 'time (s)'),
    html`<clipPath id="${id}-c"><rect x="${box.left}" y="${box.top}" width="${box.right - box.left}" height="${box.bottom - box.top}"/></clipPath><g clip-path="url(#${id}-c)">${curves(plot, scales)}</g>`,
    fences(plot.fences, scales),
    hoverSlices(plot, scales),
  ]);
}

function curves(plot: TracePlot, { x, y }: Scales): Markup {
  const { times, low, high } = plot;
  const at = [...new Set([...thinned(low, mostPoints / 2), ...thinned(high, mostPoints / 2)])].sort(
    (a, b) => a - b,
  );
  const band = area<number>()
    .defined((i) => Number.isFinite(low[i]) && Number.isFinite(high[i]))
    .x((i) => x(times[i]))
    .y0((i) => y(low[i]))
    .y1((i) => y(high[i]))
    .digits(1);
  const path = (values: readonly number[]): string =>
    pathThrough(thinned(values, mostPoints).map((i) => [x(times[i]), y(values[i])]));
  const target = plot.target && html`<path class="target" d="${path(plot.target)}"/>`;
  return html`<path class="band" d="${band(at) ?? ''}"/>${target}<path class="nominal" d="${path(plot.nominal)}"/><path class="worst" d="${path(plot.worst)}"/>`;
}

function fences(all: readonly Fence[], { x, y }: Scales): Markup[] {
  const ends = all.map(({ from, to }) => [
    [clamp(x(from.time), box.left, box.right), clamp(y(from.value), box.top, box.bottom)] as const,
    [clamp(x(to.time), box.left, box.right), clamp(y(to.value), box.top, box.bottom)] as const,
  ]);
  const heights = spread(
    ends.map(([, to], at) => to[1] + (all[at].forbidden === 'above' ? -8 : 15)),
    14,
  );
  return all.map(({ requirement, forbidden }, at) => {
    const [from, to] = ends[at];
    const line = html`<path class="fence" d="${fencePath(from, to, sides[forbidden])}"/>`;
    if (all.findIndex((one) => one.requirement === requirement) < at) return line;
    const label = shortened(oneLine(requirement), 24);
    return html`${line}<text class="fence-name" text-anchor="end" x="${px(Math.max(to[0], box.left + 60))}" y="${px(heights[at])}">${label}</text>`;
  });
}

/** Invisible slices over the plot whose tooltips give the values there; they need no script. */
function hoverSlices(plot: TracePlot, { x, shown }: Scales): Markup {
  const places = plot.times.length === 0 ? [] : sampled(plot.times.length, slices);
  const width = (box.right - box.left) / Math.max(1, places.length);
  const rows = places.map((i) => {
    const values = `at ${formatNumber(plot.times[i])} s: nominal ${shown(plot.nominal[i])}, worst ${shown(plot.worst[i])}, ${counted(plot.plants, 'plant')} ${shown(plot.low[i])} to ${shown(plot.high[i])}`;
    return html`<rect x="${px(x(plot.times[i]) - width / 2)}" y="${box.top}" width="${px(width)}" height="${box.bottom - box.top}"><title>${values}</title></rect>`;
  });
  return html`<g class="hover">${rows}</g>`;
}

function describe(plot: TracePlot, { shown }: Scales): string {
  const last = plot.times.length - 1;
  const peak = (values: readonly number[]): string =>
    shown(values.reduce((most, value) => (Math.abs(value) > Math.abs(most) ? value : most), 0));
  return `The nominal plant's largest value is ${peak(plot.nominal)} and it ends at ${shown(plot.nominal[last])}; the worst plant's largest value is ${peak(plot.worst)} and it ends at ${shown(plot.worst[last])}. Limits drawn: ${plot.fences.map(({ requirement }) => requirement).join(', ') || 'none'}.`;
}

/** Evenly spread places among so many, first and last always, at most `most`. */
export function sampled(count: number, most: number): number[] {
  const steps = Math.min(count, most);
  if (steps <= 1) return count > 0 ? [0] : [];
  return Array.from({ length: steps }, (_, at) => Math.round((at * (count - 1)) / (steps - 1)));
}

function clamp(value: number, low: number, high: number): number {
  return Math.min(high, Math.max(low, value));
}
