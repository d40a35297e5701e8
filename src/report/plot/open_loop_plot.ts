import { scaleLinear, scaleLog } from 'd3-scale';
import { formatNumber } from '../format_value.js';
import { html, type Markup } from '../html/markup.js';
import { columnsOf, oneLine, shortened } from '../plain_text.js';
import type { FrequencyCurve, MarginBracket, OpenLoopPlot } from '../plots.js';
import { axisBelow, axisLeft, type Box, drawing, extent } from './frame.js';
import { latchedLabel } from './latched_label.js';
import { decibels, frequencyText, logMarks } from './log_axis.js';
import { bracketPath, type Point, pathThrough, px } from './shape.js';
import { sampled } from './trace_plot.js';

const height = 420;
const upper: Box = { left: 52, right: 462, top: 26, bottom: 190 };
const lower: Box = { left: 52, right: 462, top: 226, bottom: 380 };
const slices = 36;
/** Of a label, px: the height of its row, and what a character takes at most. */
const rowHeight = 17;
const widthOfCharacter = 7.6;
/** Magnitudes beyond these are left out of the picture; margins lie well within, dB. */
const mostDecibels = 60;

type Scale = (value: number) => number;

/** Magnitude and phase of the open loop over frequency, each margin a bracket labelled in place. */
export function openLoopDrawing(plot: OpenLoopPlot, id: string): Markup {
  const { frequencies, nominal, worst, latched } = plot;
  const x = scaleLog([frequencies[0] ?? 1, frequencies.at(-1) ?? 10], [upper.left, upper.right]);
  const gains = [...nominal.magnitude, ...worst.magnitude, ...(latched?.magnitude ?? [])].map((ratio) =>
    clampDecibels(decibels(ratio)),
  );
  const phases = [...nominal.phase, ...worst.phase, ...(latched?.phase ?? [])].map(degrees);
  const gain = scaleLinear(extent([...gains, 0]), [upper.bottom, upper.top]);
  const phase = scaleLinear(extent([...phases, -180]), [lower.bottom, lower.top]);
  const gainPoints = ({ magnitude }: FrequencyCurve): Point[] =>
    magnitude.map((ratio, at) => [x(frequencies[at]), gain(shownDecibels(ratio))]);
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
    axisBelow(lower, logMarks(x), 'angular frequency (rad/s)'),
    levelLines(gain, phase),
    latched && curve(plot.frequencies, latched, 'latched', x, gain, phase),
    curve(plot.frequencies, nominal, 'nominal', x, gain, phase),
    curve(plot.frequencies, worst, 'worst', x, gain, phase),
    latchedLabel(latched && gainPoints(latched), gainPoints(nominal), upper),
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

function curve(
  frequencies: readonly number[],
  { magnitude, phase: angle }: FrequencyCurve,
  className: string,
  x: Scale,
  gain: Scale,
  phase: Scale,
): Markup {
  const points = (y: (at: number) => number): Point[] =>
    frequencies.map((frequency, at) => [x(frequency), y(at)]);
  const upperPath = pathThrough(points((at) => gain(shownDecibels(magnitude[at]))));
  const lowerPath = pathThrough(points((at) => phase(degrees(angle[at]))));
  return html`<path class="${className}" d="${upperPath}${lowerPath}"/>`;
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
    const values = (['nominal', 'latched', 'worst'] as const).flatMap((which) => {
      const shown = plot[which];
      if (!shown) return [];
      const { magnitude, phase } = shown;
      return `${which} ${formatNumber(decibels(magnitude[i]))} dB, ${formatNumber(degrees(phase[i]))} deg`;
    });
    return html`<rect x="${px(x(plot.frequencies[i]) - width / 2)}" y="${upper.top}" width="${px(width)}" height="${lower.bottom - upper.top}"><title>at ${frequencyText(plot.frequencies[i])}: ${values.join('; ')}</title></rect>`;
  });
  return html`<g class="hover">${rows}</g>`;
}

function describe(plot: OpenLoopPlot): string {
  const margins = plot.margins.map(
    ({ requirement, kind, curve, text, frequency }) =>
      `${requirement}, ${kind} margin of the ${curve} plant: ${text}, at ${frequencyText(frequency)}`,
  );
  const crossovers = (['nominal', 'latched', 'worst'] as const).flatMap((which) => {
    const shown = plot[which];
    return shown ? crossoverText(plot.frequencies, shown, which) : [];
  });
  return [...(margins.length > 0 ? margins : ['No margin is drawn']), ...crossovers].join('. ');
}

/** Where the gain last falls through one, in words. */
function crossoverText(
  frequencies: readonly number[],
  { magnitude }: FrequencyCurve,
  which: string,
): string[] {
  const last = magnitude.findLastIndex((ratio) => ratio >= 1);
  if (last < 0 || last === magnitude.length - 1) return [];
  return [`The ${which} loop gain falls below 0 dB at about ${frequencyText(frequencies[last])}`];
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

/** Not-a-number beyond what is shown: the curve ends there. */
function shownDecibels(ratio: number): number {
  const value = decibels(ratio);
  return Math.abs(value) <= mostDecibels ? value : Number.NaN;
}

function clampDecibels(value: number): number {
  return Math.min(mostDecibels, Math.max(-mostDecibels, value));
}

function degrees(angle: number): number {
  return (angle * 180) / Math.PI;
}
