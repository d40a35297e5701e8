import { scaleLinear, scaleLog } from 'd3-scale';
import { formatNumber } from '../format_value.js';
import { html, type Markup } from '../html/markup.js';
import { columnsOf, oneLine, shortened } from '../plain_text.js';
import type { FrequencyCurve, MarginBracket, OpenLoopPlot } from '../plots.js';
import { type AxisMark, axisBelow, axisLeft, type Box, drawing, extent } from './frame.js';
import { bracketPath, type Point, pathThrough, px, thinned } from './shape.js';
import { sampled } from './trace_plot.js';

const height = 420;
const upper: Box = { left: 52, right: 462, top: 26, bottom: 190 };
const lower: Box = { left: 52, right: 462, top: 226, bottom: 380 };
const slices = 36;
/** So many points of a curve are finer than the drawing can show. */
const mostPoints = 200;
/** Of a label, px: the height of its row, and what a character takes at most. */
const rowHeight = 17;
const widthOfCharacter = 7.6;
/** Magnitudes beyond these are left out of the picture; margins lie well within, dB. */
const mostDecibels = 60;

type Scale = (value: number) => number;

/** Magnitude and phase of the open loop over frequency, each margin a bracket labelled in place. */
export function openLoopDrawing(plot: OpenLoopPlot, id: string): Markup {
  const { frequencies, nominal, worst } = plot;
  const x = scaleLog([frequencies[0] ?? 1, frequencies.at(-1) ?? 10], [upper.left, upper.right]);
  const gains = [...nominal.magnitude, ...worst.magnitude].map((ratio) => clampDecibels(decibels(ratio)));
  const phases = [...nominal.phase, ...worst.phase].map(degrees);
  const gain = scaleLinear(extent([...gains, 0]), [upper.bottom, upper.top]);
  const phase = scaleLinear(extent([...phases, -180]), [lower.bottom, lower.top]);
  const marksX: AxisMark[] = decades(x.domain()).map((at) => ({ at: x(at), text: formatNumber(at) }));
  const phaseTicks = multiplesOf(stepOfPhase(phase.domain()), phase.domain());
  return drawing(id, height, `Open loop at ${plot.at} over frequency`, describe(plot), [
    axisLeft(
      upper,
      gain.ticks(5).map((at) => ({ at: gain(at), text: formatNumber(at) })),
      'magnitude (dB)',
    ),
    axisLeft(
      lower,
      phaseTicks.map((at) => ({ at: phase(at), text: formatNumber(at) })),
      'phase (deg)',
    ),
    axisBelow(lower, marksX, 'angular frequency (rad/s)'),
    levelLines(gain, phase),
    curve(plot, 'nominal', x, gain, phase),
    curve(plot, 'worst', x, gain, phase),
    (['gain', 'phase'] as const).map((kind) =>
      plot.margins.filter((one) => one.kind === kind).map((one, row) => bracket(one, row, x, gain, phase)),
    ),
    hoverSlices(plot, x),
  ]);
}

/** The levels at which a loop is on the edge: 0 dB and odd multiples of 180°. */
function levelLines(
  gain: (value: number) => number | undefined,
  phase: { (value: number): number; domain(): number[] },
): Markup {
  const turns = multiplesOf(180, phase.domain()).filter((at) => Math.abs(at / 180) % 2 === 1);
  const lines = turns.map((at) => `M${lower.left} ${px(phase(at))}H${lower.right}`);
  return html`<path class="level" d="M${upper.left} ${px(gain(0)!)}H${upper.right}${lines}"/>`;
}

function curve(plot: OpenLoopPlot, which: 'nominal' | 'worst', x: Scale, gain: Scale, phase: Scale): Markup {
  const { magnitude, phase: angle }: FrequencyCurve = plot[which];
  const kept = thinned(magnitude, mostPoints);
  const points = (y: (at: number) => number): Point[] => kept.map((at) => [x(plot.frequencies[at]), y(at)]);
  const upperPath = pathThrough(points((at) => gain(shownDecibels(magnitude[at]))));
  const lowerPath = pathThrough(points((at) => phase(degrees(angle[at]))));
  return html`<path class="${which}" d="${upperPath}${lowerPath}"/>`;
}

/** A bracket, and its label at the edge of its panel where the curves leave room, joined by a hairline. */
function bracket(margin: MarginBracket, row: number, x: Scale, gain: Scale, phase: Scale): Markup {
  const place = x(margin.frequency);
  const isGain = margin.kind === 'gain';
  const start = isGain ? gain(clampDecibels(decibels(margin.start))) : phase(degrees(margin.start));
  const end = isGain ? gain(0) : phase(nearestTurn(degrees(margin.start)));
  const label = `${shortened(oneLine(margin.requirement), 20)}: ${shortened(oneLine(margin.text), 44)}`;
  const height = isGain ? upper.top + 12 + rowHeight * row : lower.bottom - 8 - rowHeight * row;
  const fits = place + columnsOf(label) * widthOfCharacter < upper.right;
  const leader = isGain
    ? `M${px(place)} ${px(Math.min(start, end))}V${height + 4}`
    : `M${px(place)} ${px(Math.max(start, end))}V${height - 12}`;
  return html`<path class="leader" d="${leader}"/><path class="bracket ${margin.curve}-bracket" d="${bracketPath(place, start, end)}"/><text class="bracket-name" text-anchor="${fits ? 'start' : 'end'}" x="${fits ? px(place - 4) : upper.right}" y="${height}">${label}</text>`;
}

function hoverSlices(plot: OpenLoopPlot, x: Scale): Markup {
  const places = sampled(plot.frequencies.length, slices);
  const width = (upper.right - upper.left) / Math.max(1, places.length);
  const rows = places.map((i) => {
    const values = (['nominal', 'worst'] as const).map((which) => {
      const { magnitude, phase } = plot[which];
      return `${which} ${formatNumber(decibels(magnitude[i]))} dB, ${formatNumber(degrees(phase[i]))} deg`;
    });
    return html`<rect x="${px(x(plot.frequencies[i]) - width / 2)}" y="${upper.top}" width="${px(width)}" height="${lower.bottom - upper.top}"><title>${formatNumber(plot.frequencies[i])} rad/s: ${values.join('; ')}</title></rect>`;
  });
  return html`<g class="hover">${rows}</g>`;
}

function describe(plot: OpenLoopPlot): string {
  const margins = plot.margins.map(
    ({ requirement, kind, curve, text, frequency }) =>
      `${requirement}, ${kind} margin of the ${curve} plant: ${text}, at ${formatNumber(frequency)} rad/s`,
  );
  return margins.join('. ') || 'No margin is drawn.';
}

/** The odd multiple of 180° nearest to a phase in degrees. */
function nearestTurn(phase: number): number {
  return Math.round((phase - 180) / 360) * 360 + 180;
}

/** Degrees between two marks: parts of a turn, at most seven marks or so. */
function stepOfPhase([low, high]: readonly number[]): number {
  return [15, 30, 45, 90, 180, 360].find((step) => (high - low) / step <= 7) ?? 720;
}

function multiplesOf(step: number, [low, high]: readonly number[]): number[] {
  const first = Math.ceil(low / step);
  const count = Math.min(40, Math.max(0, Math.floor(high / step) - first + 1));
  return Array.from({ length: count }, (_, at) => (first + at) * step + 0);
}

function decades([low, high]: readonly number[]): number[] {
  const first = Math.ceil(Math.log10(low) - 1e-9);
  const count = Math.min(20, Math.max(0, Math.floor(Math.log10(high) + 1e-9) - first + 1));
  return Array.from({ length: count }, (_, at) => 10 ** (first + at));
}

/** Not-a-number beyond what is shown: the curve ends there. */
function shownDecibels(ratio: number): number {
  const value = decibels(ratio);
  return Math.abs(value) <= mostDecibels ? value : Number.NaN;
}

function clampDecibels(value: number): number {
  return Math.min(mostDecibels, Math.max(-mostDecibels, value));
}

/** 20·log10 of an amplitude ratio. */
function decibels(ratio: number): number {
  return 20 * Math.log10(ratio);
}

function degrees(angle: number): number {
  return (angle * 180) / Math.PI;
}
