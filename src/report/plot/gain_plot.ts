import { scaleLinear, scaleLog } from 'd3-scale';
import { counted, formatNumber } from '../format_value.js';
import { html, type Markup } from '../html/markup.js';
import type { GainFence, GainPlot, TightestPlace } from '../plots.js';
import { type FenceLine, fenceLines } from './fence_lines.js';
import { axisBelow, axisLeft, type Box, drawing, extent } from './frame.js';
import { latchedLabel } from './latched_label.js';
import { decibels, decibelText, frequencyText, logMarks } from './log_axis.js';
import { bandBetween, type Point, pathThrough, px } from './shape.js';
import { sampled } from './trace_plot.js';

const height = 330;
const box: Box = { left: 52, right: 462, top: 26, bottom: 290 };
const slices = 36;
/** The picture holds curves this far below the lowest limit and above the highest, dB. */
const roomBelow = 40;
const roomAbove = 24;
/** Half of what a limit at one frequency is drawn wide, px. */
const halfOfOne = 9;

/** What each response is, for titles and captions. */
export const responseNames: Readonly<Record<GainPlot['response'], { name: string; formula: string }>> = {
  sensitivity: { name: 'Sensitivity', formula: '|1/(1 + L)|' },
  following: { name: 'Following gain', formula: '|L/(1 + L)|' },
  loop: { name: 'Loop gain', formula: '|L|' },
};

interface Scales {
  /** From rad/s. */
  x: (frequency: number) => number;
  /** From a plain ratio; not-a-number where it has no decibels. */
  y: (ratio: number) => number;
}

/** The size of a response over frequency under its mask: limits are fence lines over the bands that they are for. */
export function gainDrawing(plot: GainPlot, id: string): Markup {
  const { frequencies, nominal, response, at } = plot;
  const x = scaleLog([frequencies[0] ?? 1, frequencies.at(-1) ?? 10], [box.left, box.right]);
  const level = scaleLinear(range(plot), [box.bottom, box.top]);
  const scales: Scales = { x, y: (ratio) => (ratio > 0 ? level(decibels(ratio)) : Number.NaN) };
  const marks = level.ticks(6).map((at) => ({ at: level(at), text: formatNumber(at) }));
  const { name, formula } = responseNames[response];
  return drawing(id, height, `${name} at ${at} over frequency`, describe(plot), [
    axisLeft(box, marks, `${formula} (dB)`),
    axisBelow(box, logMarks(x), 'angular frequency (rad/s)'),
    html`<clipPath id="${id}-c"><rect x="${box.left}" y="${box.top}" width="${box.right - box.left}" height="${box.bottom - box.top}"/></clipPath><g clip-path="url(#${id}-c)">${curves(plot, scales)}</g>`,
    fenceLines(
      plot.fences.map((fence) => lineOf(fence, scales)),
      box,
    ),
    latchedLabel(plot.latched && pointsOf(plot, plot.latched, scales), pointsOf(plot, nominal, scales), box),
    plot.tightest.map((place) => mark(place, plot, scales)),
    hoverSlices(plot, scales),
  ]);
}

/** Decibels from what is just below all that matters to what is just above it. */
function range({ fences, nominal, latched, worst, low, high }: GainPlot): [number, number] {
  const levels = [0, ...fences.map(({ value }) => decibels(value))];
  const [floor, ceiling] = [Math.min(...levels) - roomBelow, Math.max(...levels) + roomAbove];
  const all = [nominal, latched ?? [], ...worst.map(({ values }) => values), low, high].flat();
  const shown = all.map((ratio) => Math.min(ceiling, Math.max(floor, decibels(ratio))));
  return extent([...levels, ...shown]);
}

function pointsOf({ frequencies }: GainPlot, values: readonly number[], { x, y }: Scales): Point[] {
  return values.map((value, at) => [x(frequencies[at]), y(value)]);
}

function curves(plot: GainPlot, scales: Scales): Markup {
  const path = (className: string, values: readonly number[]): Markup => {
    return html`<path class="${className}" d="${pathThrough(pointsOf(plot, values, scales))}"/>`;
  };
  const band = bandBetween(pointsOf(plot, plot.high, scales), pointsOf(plot, plot.low, scales));
  return html`<path class="band" d="${band}"/>${plot.latched && path('latched', plot.latched)}${path('nominal', plot.nominal)}${plot.worst.map(({ values }, at) => path(worstClass(at), values))}`;
}

/** The look of the worst plant's curve number `at`: several are told apart by their dashes. */
export function worstClass(at: number): string {
  return at === 0 ? 'worst' : `worst worst-${at + 1}`;
}

/** A limit at one frequency is drawn a little wider than it is, so that it can be seen. */
function lineOf({ requirement, from, to, value, forbidden }: GainFence, { x, y }: Scales): FenceLine {
  const [left, right] = [from > 0 ? x(from) : box.left, x(to)];
  const wider = from === to ? halfOfOne : 0;
  return { requirement, forbidden, from: [left - wider, y(value)], to: [right + wider, y(value)] };
}

/** A ring where a worst plant is tightest; what lies below the picture's lowest frequency stands at its edge. */
function mark(
  { requirement, frequency, value, text }: TightestPlace,
  plot: GainPlot,
  { x, y }: Scales,
): Markup {
  const at = x(Math.max(frequency, plot.frequencies[0]));
  const label = `${requirement}: ${text}, at ${frequencyText(frequency)}`;
  return html`<circle class="bracket-end worst-end" cx="${px(at)}" cy="${px(Math.min(box.bottom, Math.max(box.top, y(value))))}" r="4"><title>${label}</title></circle>`;
}

function hoverSlices(plot: GainPlot, { x }: Scales): Markup {
  const places = sampled(plot.frequencies.length, slices);
  const width = (box.right - box.left) / Math.max(1, places.length);
  const rows = places.map((i) => {
    const values = [
      `nominal ${decibelText(plot.nominal[i])}`,
      ...(plot.latched ? [`latched ${decibelText(plot.latched[i])}`] : []),
      ...plot.worst.map(
        ({ requirements, values }) => `worst of ${requirements.join(' and ')} ${decibelText(values[i])}`,
      ),
      ...(plot.plants > 0
        ? [`${counted(plot.plants, 'plant')} ${decibelText(plot.low[i])} to ${decibelText(plot.high[i])}`]
        : []),
    ];
    return html`<rect x="${px(x(plot.frequencies[i]) - width / 2)}" y="${box.top}" width="${px(width)}" height="${box.bottom - box.top}"><title>at ${frequencyText(plot.frequencies[i])}: ${values.join(', ')}</title></rect>`;
  });
  return html`<g class="hover">${rows}</g>`;
}

function describe(plot: GainPlot): string {
  const limits = plot.fences.map(
    ({ requirement, from, to, value, forbidden }) =>
      `${requirement}: not ${forbidden} ${decibelText(value)} ${bandText(from, to)}`,
  );
  const places = plot.tightest.map(
    ({ requirement, frequency, value, text }) =>
      `${requirement}: ${text}, which is ${decibelText(value)} at ${frequencyText(frequency)}`,
  );
  const peaks = [
    peakText('nominal plant', plot.nominal, plot.frequencies),
    ...(plot.latched ? [peakText('latched coefficients', plot.latched, plot.frequencies)] : []),
  ];
  return `Limits: ${limits.join('; ')}. Worst plants: ${places.join('; ') || 'no place to mark'}. Largest in the picture: ${peaks.join('; ')}.`;
}

function bandText(from: number, to: number): string {
  if (from === to) return `at ${frequencyText(from)}`;
  return from > 0 ? `from ${frequencyText(from)} to ${frequencyText(to)}` : `up to ${frequencyText(to)}`;
}

function peakText(whose: string, values: readonly number[], frequencies: readonly number[]): string {
  const largest = values.reduce((best, value, at) => (value > (values[best] || 0) ? at : best), 0);
  return `${whose} ${decibelText(values[largest] ?? Number.NaN)} at ${frequencyText(frequencies[largest] ?? 0)}`;
}
