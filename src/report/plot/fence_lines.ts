import { html, type Markup } from '../html/markup.js';
import { columnsOf, oneLine, shortened } from '../plain_text.js';
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

/** Of a name, px: what it needs above its foot and below it, and what a character takes at most. */
const ascent = 11;
const descent = 4;
const widthOfCharacter = 8;

/** Where a name stands: its anchor and its foot, and the box that it fills. */
interface Label {
  anchor: 'start' | 'middle' | 'end';
  x: number;
  foot: number;
  left: number;
  right: number;
}

/** Limits as thin lines with ticks on the broken side, held within the box, each requirement's name once at an end of it. */
export function fenceLines(all: readonly FenceLine[], box: Box): Markup[] {
  const lines = all.map(({ from, to, ...others }) => ({
    ...others,
    from: within(box, from),
    to: within(box, to),
  }));
  const labels: Label[] = [];
  return lines.map((line, at) => {
    const { requirement, from, to, forbidden } = line;
    const path = html`<path class="fence" d="${fencePath(from, to, sides[forbidden])}"/>`;
    if (lines.findIndex((one) => one.requirement === requirement) < at) return path;
    const text = shortened(oneLine(requirement), 24);
    const others = lines.filter((one) => one !== line);
    const label = freeLabel(line, columnsOf(text) * widthOfCharacter, others, labels, box);
    labels.push(label);
    return html`${path}<text class="fence-name" text-anchor="${label.anchor}" x="${px(label.x)}" y="${px(label.foot)}">${text}</text>`;
  });
}

/**
 * A place for a name where no other line or name is: at the line's end on its broken side beyond the ticks, on its other side, at
 * its start, in its middle; where all these are taken, further down at its end.
 */
function freeLabel(
  line: FenceLine,
  width: number,
  others: readonly FenceLine[],
  labels: readonly Label[],
  box: Box,
): Label {
  const feet = ({ 1: height }: Point): number[] => {
    const above = height - (line.forbidden === 'above' ? 8 : 5);
    const below = height + (line.forbidden === 'below' ? 17 : 14);
    return line.forbidden === 'below' ? [below, above] : [above, below];
  };
  const { from, to } = line;
  const middle: Point = [(from[0] + to[0]) / 2, (from[1] + to[1]) / 2];
  const end: Point = [Math.max(to[0], box.left + width), to[1]];
  const places = [
    ...feet(end).map((foot) => labelAt('end', end[0], foot, width)),
    ...feet(from).map((foot) => labelAt('start', from[0] + 4, foot, width)),
    ...feet(middle).map((foot) => labelAt('middle', middle[0], foot, width)),
  ];
  const further = Array.from({ length: 20 }, (_, step) =>
    labelAt('end', end[0], to[1] + 18 + 4 * step, width),
  );
  const isFree = (label: Label): boolean =>
    others.every((other) => !isCrossed(label, other)) && labels.every((other) => !isOver(label, other));
  return [...places, ...further].find(isFree) ?? places[0];
}

function labelAt(anchor: Label['anchor'], x: number, foot: number, width: number): Label {
  const left = x - { start: 0, middle: width / 2, end: width }[anchor];
  return { anchor, x, foot, left, right: left + width };
}

function isCrossed({ left, right, foot }: Label, { from, to }: FenceLine): boolean {
  const [top, bottom] = [Math.min(from[1], to[1]), Math.max(from[1], to[1])];
  return from[0] < right && to[0] > left && top < foot + descent && bottom > foot - ascent;
}

function isOver(one: Label, other: Label): boolean {
  const isBeside = one.left >= other.right || one.right <= other.left;
  return !isBeside && Math.abs(one.foot - other.foot) < ascent + descent - 1;
}

function within({ left, right, top, bottom }: Box, [x, y]: Point): Point {
  return [Math.min(right, Math.max(left, x)), Math.min(bottom, Math.max(top, y))];
}
