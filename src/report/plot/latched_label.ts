import { html, type Markup } from '../html/markup.js';
import type { Box } from './frame.js';
import { type Point, px } from './shape.js';

/** So far apart (px) two curves are told apart at once: from there on the middle of the drawing is the better place. */
const farEnough = 26;

/** The word at the curve of the latched coefficients, where it is well apart from the nominal one; nothing without such a curve. */
export function latchedLabel(
  latched: readonly Point[] | undefined,
  nominal: readonly Point[],
  { left, right, top, bottom }: Box,
): Markup | undefined {
  if (!latched) return undefined;
  const isInside = ([x, y]: Point): boolean =>
    x > left + 30 && x < right - 30 && y > top + 16 && y < bottom - 20;
  const score = ([x, y]: Point, at: number): number =>
    Math.min(farEnough, Math.abs(y - nominal[at][1])) - Math.abs(x - (left + right) / 2) / (right - left);
  const best = latched.reduce<number | undefined>((found, point, at) => {
    if (!isInside(point) || !Number.isFinite(nominal[at][1])) return found;
    return found === undefined || score(point, at) > score(latched[found], found) ? at : found;
  }, undefined);
  if (best === undefined) return undefined;
  const [x, y] = latched[best];
  const isAbove = y <= nominal[best][1];
  return html`<text class="curve-name" text-anchor="middle" x="${px(x)}" y="${px(isAbove ? y - 7 : y + 16)}">latched</text>`;
}
