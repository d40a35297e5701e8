import { scaleLinear } from 'd3-scale';
import { formatNumber } from '../format_value.js';
import { html, type Markup } from '../html/markup.js';
import { oneLine, shortened } from '../plain_text.js';
import type { FrequencyCurve, LiftedLoop, Locus, LocusMark, ModulusBracket, OpenLoopPlot } from '../plots.js';
import { axisBelow, axisLeft, type Box, drawing, drawingWidth } from './frame.js';
import { type Point, pathThrough, px } from './shape.js';

const box: Box = { left: 52, right: 462, top: 26, bottom: 436 };
const height = 476;
/** The part of the complex plane that is shown: about −1, where the margins are. */
const real: [number, number] = [-2.5, 1];
const imaginary: [number, number] = [-1.75, 1.75];
/** Points further out are left out; the curve is broken there. */
const farthest = 20;
const ticksOfCircle = 36;

type Scale = (value: number) => number;

/** The locus of the open loop in the complex plane about −1, with the circle that the modulus margin must keep clear. */
export function locusDrawing(plot: OpenLoopPlot, id: string): Markup {
  const x = scaleLinear(real, [box.left, box.right]);
  const y = scaleLinear(imaginary, [box.bottom, box.top]);
  const marks = (scale: typeof x) => scale.ticks(5).map((at) => ({ at: scale(at), text: formatNumber(at) }));
  const unit = Math.abs(x(1) - x(0));
  const clip = `${id}-c`;
  return drawing(id, height, `Locus of the open loop at ${plot.at}`, describe(plot), [
    axisLeft(box, marks(y), 'imaginary part'),
    axisBelow(box, marks(x), 'real part'),
    html`<clipPath id="${clip}"><rect x="${box.left}" y="${box.top}" width="${drawingWidth - box.left}" height="${box.bottom - box.top}"/></clipPath>`,
    html`<g clip-path="url(#${clip})"><circle class="level" cx="${px(x(0))}" cy="${px(y(0))}" r="${px(unit)}"/>${plot.modulus && modulusCircle(plot.modulus, x, y, unit)}${lociOf(plot, x, y)}</g>`,
    html`<path class="critical" d="M${px(x(-1) - 5)} ${px(y(0))}h10m-5 -5v10"/>`,
    plot.modulus && modulusBracket(plot.modulus, x, y),
    plot.lifted?.marks.map((mark, at) => marginMark(mark, at, x, y)),
  ]);
}

/** The curves, the latched one below the others; of a lifted loop every eigenvalue has its own. */
function lociOf(plot: OpenLoopPlot, x: Scale, y: Scale): Markup[] {
  return (['latched', 'nominal', 'worst'] as const).flatMap((which) => {
    const shown = plot[which];
    if (!shown) return [];
    const loci = plot.lifted?.[which];
    const path = loci ? loci.map((one) => way(one, x, y)).join('') : locus(shown, x, y);
    return [html`<path class="${which}" d="${path}"/>`];
  });
}

function way(points: Locus, x: Scale, y: Scale): string {
  return pathThrough(points.map(({ real, imaginary }): Point => [x(real), y(imaginary)]));
}

/**
 * Where a margin is read from a locus: a bracket from −1 to there, its label in a row of its own, in turn at the upper and at the
 * lower edge, so that no leader crosses another's label.
 */
function marginMark({ requirement, curve, at, text }: LocusMark, row: number, x: Scale, y: Scale): Markup {
  const [toX, toY] = [x(at.real), y(at.imaginary)];
  const label = `${shortened(oneLine(requirement), 20)}: ${shortened(oneLine(text), 44)}`;
  const down = 18 * Math.floor(row / 2);
  const isAbove = row % 2 === 0;
  const height = isAbove ? box.top + 16 + down : box.bottom - 10 - down;
  return html`<path class="leader" d="M${px(toX)} ${px(toY)}V${isAbove ? height + 4 : height - 13}"/><path class="bracket ${curve}-bracket" d="M${px(x(-1))} ${px(y(0))}L${px(toX)} ${px(toY)}"/><circle class="bracket-end ${curve}-end" cx="${px(toX)}" cy="${px(toY)}" r="3.5"/><text class="bracket-name" x="${box.left + 8}" y="${height}">${label}</text>`;
}

function locus({ magnitude, phase }: FrequencyCurve, x: Scale, y: Scale): string {
  const points = magnitude.map((ratio, at): Point => {
    if (!(ratio <= farthest)) return [Number.NaN, Number.NaN];
    return [x(ratio * Math.cos(phase[at])), y(ratio * Math.sin(phase[at]))];
  });
  return pathThrough(points);
}

/** The limit as a round fence, its ticks inward: the locus must not come in. */
function modulusCircle({ limit }: ModulusBracket, x: Scale, y: Scale, unit: number): Markup {
  const radius = limit * unit;
  const ticks = Array.from({ length: ticksOfCircle }, (_, at) => {
    const angle = (2 * Math.PI * at) / ticksOfCircle;
    const [cos, sin] = [Math.cos(angle), Math.sin(angle)];
    return `M${px(x(-1) + radius * cos)} ${px(y(0) + radius * sin)}l${px(-4 * cos)} ${px(-4 * sin)}`;
  });
  return html`<circle class="fence" cx="${px(x(-1))}" cy="${px(y(0))}" r="${px(radius)}"/><path class="fence" d="${ticks}"/>`;
}

function modulusBracket(modulus: ModulusBracket, x: Scale, y: Scale): Markup {
  const { nearest, curve } = modulus;
  const to: Point = [x(nearest.real), y(nearest.imaginary)];
  const label = `${shortened(oneLine(modulus.requirement), 20)}: ${shortened(oneLine(modulus.text), 44)}`;
  return html`<path class="bracket ${curve}-bracket" d="M${px(x(-1))} ${px(y(0))}L${px(to[0])} ${px(to[1])}"/><circle class="bracket-end ${curve}-end" cx="${px(to[0])}" cy="${px(to[1])}" r="3.5"/><text class="bracket-name" x="${box.left + 8}" y="${px(y(modulus.limit) - 10)}">${label}</text>`;
}

function describe({ modulus, lifted }: OpenLoopPlot): string {
  if (lifted) return describeLifted(lifted);
  if (!modulus) return 'No requirement on the modulus margin.';
  return `${modulus.requirement}: ${modulus.text}; the ${modulus.curve} plant comes nearest to -1 at ${complexText(modulus.nearest)}; it must stay ${formatNumber(modulus.limit)} away.`;
}

function describeLifted({ changes, marks }: LiftedLoop): string {
  const read = marks.map(
    ({ requirement, kind, curve, at, text }) =>
      `${requirement}, ${kind} margin of the ${curve} plant: ${text}, read at ${complexText(at)}`,
  );
  return `The loci of the ${changes} eigenvalues of the lifted loop. ${read.join('. ') || 'No margin is marked'}.`;
}

function complexText({ real, imaginary }: { real: number; imaginary: number }): string {
  return `${formatNumber(real)} ${imaginary < 0 ? '-' : '+'} ${formatNumber(Math.abs(imaginary))}j`;
}
