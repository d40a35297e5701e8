import { html, type Markup } from '../html/markup.js';
import { oneLine, shortened } from '../plain_text.js';
import type { Box } from './frame.js';
import { fencePath, type Point, px } from './shape.js';

/** A limit in a drawing: a straight line between two points in px, and the side on which a curve must not be. */
export interface FenceLine {
  requirement: string;
  from: Point;
  to: Point;
  forbidden: 'above' | 'below' | 'left' | 'right';
}

const sides: Readonly<Record<FenceLine['forbidden'], Point>> = {
  above: [0, -1],
  below: [0, 1],
  left: [-1, 0],
  right: [1, 0],
};

/** What a name needs above its foot and below it, px. */
const ascent = 11;
const descent = 4;

/** Limits as thin lines with ticks on the broken side, held within the box, each requirement's name once at its end. */
export function fenceLines(all: readonly FenceLine[], box: Box): Markup[] {
  const ends = all.map(({ from, to }) => [within(box, from), within(box, to)] as const);
  const taken = ends.flatMap(([from, to]) => [...new Set([from[1], to[1]])]);
  const feet: number[] = [];
  return all.map(({ requirement, forbidden }, at) => {
    const [from, to] = ends[at];
    const line = html`<path class="fence" d="${fencePath(from, to, sides[forbidden])}"/>`;
    if (all.findIndex((one) => one.requirement === requirement) < at) return line;
    const foot = freeFoot(to[1], forbidden, taken, feet);
    feet.push(foot);
    const label = shortened(oneLine(requirement), 24);
    return html`${line}<text class="fence-name" text-anchor="end" x="${px(Math.max(to[0], box.left + 60))}" y="${px(foot)}">${label}</text>`;
  });
}

/**
 * The foot of a name at a line of this height: on its broken side beyond the ticks, or on the other where another line or
 * name is in the way; where both are, further down until none is.
 */
function freeFoot(
  height: number,
  forbidden: FenceLine['forbidden'],
  lines: readonly number[],
  feet: readonly number[],
): number {
  const others = lines.filter((line) => Math.abs(line - height) > 1);
  const isFree = (foot: number): boolean =>
    others.every((line) => line < foot - ascent || line > foot + descent) &&
    feet.every((other) => Math.abs(other - foot) >= ascent + descent - 1);
  const above = height - (forbidden === 'above' ? 8 : 5);
  const below = height + (forbidden === 'below' ? 17 : 14);
  const wanted = forbidden === 'below' ? [below, above] : [above, below];
  const further = Array.from({ length: 20 }, (_, step) => below + 4 * (step + 1));
  return [...wanted, ...further].find(isFree) ?? wanted[0];
}

function within({ left, right, top, bottom }: Box, [x, y]: Point): Point {
  return [Math.min(right, Math.max(left, x)), Math.min(bottom, Math.max(top, y))];
}
