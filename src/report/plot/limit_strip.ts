import { scaleLinear } from 'd3-scale';
import type { JudgedPlant, RequirementRun } from '../../verdict/run.js';
import { formatLimit, formatNumber, formatResult, formatValue, inWrittenUnit } from '../format_value.js';
import { html, type Markup } from '../html/markup.js';
import { limitInWords, limitNumbers } from '../requirement_in_words.js';
import { type Box, drawing, extent } from './frame.js';
import { fencePath, px } from './shape.js';

const height = 84;
const box: Box = { left: 26, right: 454, top: 30, bottom: 56 };
/** What a word under the line needs, px. */
const roomForWord = 52;
const middle = (box.top + box.bottom) / 2;

/** Whether the latched coefficients gave a number under today's spec that is another one than today's. */
export function isLatchedShown({ comparison }: Pick<RequirementRun, 'comparison'>): boolean {
  const { rerun, today } = comparison ?? {};
  if (rerun?.result.kind !== 'value' || !today) return false;
  return today.result.kind !== 'value' || today.result.value !== rerun.result.value;
}

/**
 * A requirement's number on a line: the limit as a fence, the nominal plant as a ring, the worst as a diamond, and what the
 * latched coefficients give at their worst as a square.
 */
export function limitStrip(requirement: RequirementRun, id: string): Markup {
  const { limit, nominal, worst } = requirement;
  const written = (value: number): number => onTheLine(value, requirement);
  const limits = limitNumbers(limit).map(written);
  const latched = isLatchedShown(requirement) ? requirement.comparison!.rerun!.result : undefined;
  const values = [nominal.result, worst.result, latched].flatMap((result) =>
    result?.kind === 'value' ? [written(result.value)] : [],
  );
  const x = scaleLinear(extent([...limits, ...values]), [box.left, box.right]).clamp(true);
  const ends = [nominal, worst].flatMap((plant) => offTheLine(requirement, plant, x));
  const marks = x
    .ticks(5)
    .map((at) => ({ at: x(at), text: formatNumber(at) }))
    .filter(({ at }) => ends.every((end) => Math.abs(end.at - at) > roomForWord));
  return drawing(id, height, `${requirement.name} against its limit`, describe(requirement), [
    html`<path class="axis" d="M${box.left} ${middle}H${box.right}${marks.map(({ at }) => `M${px(at)} ${middle}v4`)}"/>`,
    [...marks, ...ends].map(
      ({ at, text }) =>
        html`<text class="mark" text-anchor="middle" x="${px(at)}" y="${box.bottom + 20}">${text}</text>`,
    ),
    limitNumbers(limit).map((number, at) => fence(requirement, number, x(limits[at]), at)),
    latched?.kind === 'value' ? latchedPoint(requirement, latched.value, x) : undefined,
    point(requirement, nominal, 'nominal', x),
    point(requirement, worst, 'worst', x),
  ]);
}

/** Ticks point to the side where the requirement is broken. */
function fence(requirement: RequirementRun, number: number, at: number, which: number): Markup {
  const isUpper = 'at_most' in requirement.limit || ('between' in requirement.limit && which === 1);
  const anchor = at > 400 ? 'end' : at < 80 ? 'start' : 'middle';
  return html`<path class="fence" d="${fencePath([at, box.top - 8], [at, box.bottom + 2], [isUpper ? 1 : -1, 0])}"/><text class="fence-name" text-anchor="${anchor}" x="${px(at)}" y="${box.top - 14}">${isUpper ? 'at most' : 'at least'} ${formatLimit(number, requirement)}</text>`;
}

type Scale = ((value: number) => number) & { range(): number[] };

/** A plant's point on the line, or at its end where `offTheLine` has a word for it. */
function point(
  requirement: RequirementRun,
  plant: JudgedPlant,
  which: 'nominal' | 'worst',
  x: Scale,
): Markup | undefined {
  const { result } = plant;
  if (result.kind === 'unformed') return undefined;
  const title = `${which}: ${formatResult(result, requirement, limitNumbers(requirement.limit))}`;
  const [end] = offTheLine(requirement, plant, x);
  const at = end || result.kind !== 'value' ? end.at : x(onTheLine(result.value, requirement));
  if (which === 'nominal') {
    return html`<circle class="nominal-point" cx="${px(at)}" cy="${middle}" r="6"><title>${title}</title></circle>`;
  }
  return html`<path class="worst-point" d="M${px(at)} ${middle - 7}l7 7l-7 7l-7 -7z"><title>${title}</title></path>`;
}

/** Left out where it is beyond both ends: it is told in words. */
function latchedPoint(requirement: RequirementRun, value: number, x: Scale): Markup | undefined {
  const own = onTheLine(value, requirement);
  if (!Number.isFinite(own)) return undefined;
  const title = `latched: ${formatValue(value, requirement, limitNumbers(requirement.limit))}`;
  return html`<rect class="latched-point" x="${px(x(own) - 5)}" y="${middle - 5}" width="10" height="10"><title>${title}</title></rect>`;
}

/** A value in its unit; a ratio below zero has no decibels and lies below all of them. */
function onTheLine(value: number, requirement: RequirementRun): number {
  const own = inWrittenUnit(value, requirement);
  return Number.isNaN(own) ? Number.NEGATIVE_INFINITY : own;
}

/** The end of the line and a word for it, for a result that has no place between the ends. */
function offTheLine(
  requirement: RequirementRun,
  { result }: JudgedPlant,
  x: Scale,
): { at: number; text: string }[] {
  const [low, high] = x.range();
  const brokenEnd = 'at_least' in requirement.limit ? low : high;
  if (result.kind === 'unformed') return [];
  if (result.kind !== 'value') return [{ at: brokenEnd, text: result.kind }];
  const value = onTheLine(result.value, requirement);
  if (Number.isFinite(value)) return [];
  return [{ at: value > 0 ? high : low, text: formatValue(result.value, requirement) }];
}

function describe(requirement: RequirementRun): string {
  const { limit, nominal, worst } = requirement;
  const limits = limitNumbers(limit);
  const latched = isLatchedShown(requirement)
    ? `; worst with the latched coefficients ${formatResult(requirement.comparison!.rerun!.result, requirement, limits)}`
    : '';
  return `Limit ${limitInWords(limit, requirement)}; nominal ${formatResult(nominal.result, requirement, limits)}; worst ${formatResult(worst.result, requirement, limits)}${latched}.`;
}
