import type { Part } from '../html/markup.js';
import { html, type Markup } from '../html/markup.js';
import { px } from './shape.js';

/** The box inside a drawing in which curves are, px. */
export interface Box {
  left: number;
  right: number;
  top: number;
  bottom: number;
}

/** Width of every drawing in its own px; it is scaled to the column it stands in. */
export const drawingWidth = 480;

/** A mark on an axis: where, in px, and what is written. */
export interface AxisMark {
  at: number;
  text: string;
}

/** A drawing with a title and a description for those who do not see it. `id` is unique on the page. */
export function drawing(
  id: string,
  height: number,
  title: string,
  description: string,
  content: Part,
): Markup {
  return html`<svg class="drawing" viewBox="0 0 ${drawingWidth} ${height}" role="img" aria-labelledby="${id}-t ${id}-d" focusable="false"><title id="${id}-t">${title}</title><desc id="${id}-d">${description}</desc>${content}</svg>`;
}

/** The horizontal axis below the box: marks and the name of what it shows. */
export function axisBelow(box: Box, marks: readonly AxisMark[], name: string): Markup {
  return html`<path class="axis" d="M${box.left} ${box.bottom}H${box.right}${marks.map(({ at }) => `M${px(at)} ${box.bottom}v4`)}"/>${marks.map(
    ({ at, text }) =>
      html`<text class="mark" text-anchor="middle" x="${px(at)}" y="${box.bottom + 17}">${text}</text>`,
  )}<text class="axis-name" text-anchor="end" x="${box.right}" y="${box.bottom + 33}">${name}</text>`;
}

/** The vertical axis at the left of the box: marks with hairlines across, the name above. */
export function axisLeft(box: Box, marks: readonly AxisMark[], name: string): Markup {
  return html`<path class="hair" d="${marks.map(({ at }) => `M${box.left} ${px(at)}H${box.right}`)}"/>${marks.map(
    ({ at, text }) =>
      html`<text class="mark" text-anchor="end" x="${box.left - 6}" y="${px(at + 4)}">${text}</text>`,
  )}<text class="axis-name" x="${Math.min(6, box.left)}" y="${box.top - 9}">${name}</text>`;
}

/** Numbers beyond this are drawn at it, those below its inverse at zero: axes need room to compute. */
const mostSize = 1e150;

/**
 * The smallest interval that holds all finite values, opened by a twentieth at both ends and by a millionth of their
 * size at least, so that it can be marked; [0, 1] where there is none.
 */
export function extent(values: readonly number[]): [number, number] {
  let low = Number.POSITIVE_INFINITY;
  let high = Number.NEGATIVE_INFINITY;
  for (const value of values) {
    if (!Number.isFinite(value)) continue;
    const held = Math.abs(value) < 1 / mostSize ? 0 : Math.min(mostSize, Math.max(-mostSize, value));
    low = Math.min(low, held);
    high = Math.max(high, held);
  }
  if (low > high) return [0, 1];
  if (low === high) return low === 0 ? [-1, 1] : [low - Math.abs(low) / 10, high + Math.abs(low) / 10];
  const size = Math.max(Math.abs(low), Math.abs(high));
  const opening = Math.max((high - low) / 20, size / 1e6);
  return [low - opening, high + opening];
}

/**
 * As `extent`, for values that matter and others that may run away: these are held only as far as twice the width of
 * those that matter beyond them.
 */
export function extentAround(matter: readonly number[], others: readonly number[]): [number, number] {
  const [low, high] = extent(matter);
  const room = 2 * (high - low);
  return extent([low, high, ...others.map((value) => Math.min(high + room, Math.max(low - room, value)))]);
}
