import { scaleLinear } from 'd3-scale';
import { formatHeadroom, formatNumber, unitText } from '../format_value.js';
import { html, type Markup } from '../html/markup.js';
import { oneLine, shortened } from '../plain_text.js';
import type { HeadroomPlane, PlaneAxis } from '../plots.js';
import { axisBelow, axisLeft, type Box, drawing } from './frame.js';
import { px } from './shape.js';

const height = 340;
const box: Box = { left: 64, right: 370, top: 26, bottom: 300 };
/** Steps of the ramp: headroom of 0 to 100 % in tenths. */
const steps = 10;

type Step = number | 'broken' | 'none';

/** Headroom over the plane of two parameters in a ramp of one hue; broken cells are hatched, the edge is a line. */
export function planeDrawing(plane: HeadroomPlane, id: string): Markup {
  const { x, y, headroom } = plane;
  const left = scaleLinear(edges(x), [box.left, box.right]);
  const top = scaleLinear(edges(y), [box.bottom, box.top]);
  const cells = new Map<Step, string>();
  headroom.forEach((row, r) => {
    row.forEach((share, c) => {
      const step = stepOf(share);
      cells.set(step, (cells.get(step) ?? '') + cellAt(plane, r, c));
    });
  });
  const title = `Headroom of ${plane.requirement} over ${x.parameter} and ${y.parameter}`;
  return drawing(id, height, title, describe(plane), [
    html`<defs><pattern id="${id}-h" width="6" height="6" patternUnits="userSpaceOnUse" patternTransform="rotate(45)"><path class="hatch" d="M0 0V6"/></pattern></defs>`,
    axisLeft(box, marks(left.copy().domain(top.domain()).range(top.range()), y), axisName(y)),
    html`<rect class="under-point" x="${box.left}" y="${box.top}" width="${box.right - box.left}" height="${box.bottom - box.top}"/>`,
    [...cells].map(([step, path]) => cellPath(step, path, id)),
    html`<path class="edge" d="${edgeOfBroken(plane)}"/>`,
    axisBelow(box, marks(left, x), axisName(x)),
    html`<circle class="under-point" cx="${px(left(x.nominal))}" cy="${px(top(y.nominal))}" r="8"/><circle class="nominal-point" cx="${px(left(x.nominal))}" cy="${px(top(y.nominal))}" r="5"/>`,
    html`<path class="worst-point" d="M${px(left(x.worst))} ${px(top(y.worst) - 6)}l6 6l-6 6l-6 -6z"/>`,
    ramp(id),
  ]);
}

function cellPath(step: Step, path: string, id: string): Markup {
  if (step === 'broken') {
    return html`<path class="cell" fill-opacity="0.02" d="${path}"/><path style="fill:url(#${id}-h)" d="${path}"><title>broken</title></path>`;
  }
  if (step === 'none') return html`<path class="no-cell" d="${path}"><title>no number</title></path>`;
  return html`<path class="cell" fill-opacity="${opacity(step)}" d="${path}"><title>headroom ${step * 10} to ${step * 10 + 10} %</title></path>`;
}

function stepOf(share: number): Step {
  if (Number.isNaN(share)) return 'none';
  if (share < 0) return 'broken';
  return Math.min(steps - 1, Math.floor(share * steps));
}

function opacity(step: number): number {
  return Math.round((0.1 + (0.85 * step) / (steps - 1)) * 100) / 100;
}

/** The outer edges of the first and the last cell. */
function edges({ values }: PlaneAxis): [number, number] {
  const half = values.length > 1 ? (values[1] - values[0]) / 2 : Math.abs(values[0]) / 2 || 0.5;
  return [values[0] - half, values[values.length - 1] + half];
}

/** Left edge of a column and lower edge of a row, in whole px so that cells meet without a gap. */
const columnEdge = ({ x }: HeadroomPlane, c: number): number =>
  Math.round(box.left + (c * (box.right - box.left)) / x.values.length);
const rowEdge = ({ y }: HeadroomPlane, r: number): number =>
  Math.round(box.bottom - (r * (box.bottom - box.top)) / y.values.length);

function cellAt(plane: HeadroomPlane, r: number, c: number): string {
  const left = columnEdge(plane, c);
  return `M${left} ${rowEdge(plane, r)}H${columnEdge(plane, c + 1)}V${rowEdge(plane, r + 1)}H${left}z`;
}

/** Lines between cells that hold and cells that do not. */
function edgeOfBroken(plane: HeadroomPlane): string {
  const isBroken = (r: number, c: number): boolean => !(plane.headroom[r][c] >= 0);
  let path = '';
  plane.headroom.forEach((row, r) => {
    row.forEach((_, c) => {
      const start = `M${columnEdge(plane, c)} ${rowEdge(plane, r)}`;
      if (c > 0 && isBroken(r, c) !== isBroken(r, c - 1)) path += `${start}V${rowEdge(plane, r + 1)}`;
      if (r > 0 && isBroken(r, c) !== isBroken(r - 1, c)) path += `${start}H${columnEdge(plane, c + 1)}`;
    });
  });
  return path;
}

function marks(
  scale: { (value: number): number; domain(): number[] },
  { unit }: PlaneAxis,
): { at: number; text: string }[] {
  const [low, high] = scale.domain().map((value) => value / unit.scale);
  return scaleLinear([low, high], [0, 1])
    .ticks(4)
    .map((at) => ({ at: scale(at * unit.scale), text: formatNumber(at) }));
}

function axisName({ parameter, unit }: PlaneAxis): string {
  const text = unitText({ unit, inDecibels: false });
  return `${shortened(oneLine(parameter), 30)}${text === '' ? '' : ` (${text})`}`;
}

/** What the ramp means, at the right of the plane. */
function ramp(id: string): Markup {
  const left = box.right + 14;
  const tall = 16;
  const rows = Array.from({ length: steps }, (_, at) => steps - 1 - at).map((step, at) => {
    const label =
      step % 3 === 0
        ? html`<text class="mark" x="${left + 22}" y="${box.top + at * tall + 16}">${step * 10} %</text>`
        : undefined;
    return html`<rect class="cell" fill-opacity="${opacity(step)}" x="${left}" y="${box.top + at * tall}" width="16" height="${tall}"/>${label}`;
  });
  const below = box.top + steps * tall + 8;
  return html`<g>${rows}<rect style="fill:url(#${id}-h)" x="${left}" y="${below}" width="16" height="16"/><text class="mark" x="${left + 22}" y="${below + 12}">broken</text><text class="axis-name" x="${left}" y="${box.top - 9}">headroom</text></g>`;
}

function describe({ headroom, x, y }: HeadroomPlane): string {
  const all = headroom.flat().filter((share) => !Number.isNaN(share));
  const finite = all.filter(Number.isFinite);
  if (finite.length === 0) return 'No plant of this plane has a number.';
  const least = finite.reduce((a, b) => Math.min(a, b), 1);
  const most = finite.reduce((a, b) => Math.max(a, b), least);
  const broken = all.filter((share) => share < 0).length;
  return `${x.parameter} runs to the right, ${y.parameter} upward. Headroom runs from ${formatHeadroom(least)} to ${formatHeadroom(most)}; ${broken} of ${all.length} plants in this plane break the limit.`;
}
