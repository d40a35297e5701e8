import type { MeasureResult } from '../measure/measure.js';
import type { Unit } from '../spec/spec.js';
import { oneLine } from './plain_text.js';

/** The unit in which people read a requirement's numbers; `inDecibels` stands for 20·log10 of an amplitude ratio. */
export interface WrittenUnit {
  unit: Unit;
  inDecibels: boolean;
}

const usualDigits = 4;
const limitDigits = 10;
/** A double has no more than 17 significant decimal digits. */
const mostDigits = 17;

/** A number with so many significant digits, no trailing zeros. */
export function formatNumber(value: number, digits = usualDigits): string {
  if (value === Number.POSITIVE_INFINITY) return 'infinite';
  if (value === Number.NEGATIVE_INFINITY) return 'minus infinite';
  if (Number.isNaN(value)) return 'not a number';
  return String(Number(value.toPrecision(digits)) + 0);
}

/** An SI value as a bare number in the written unit: divided by the unit's scale, or 20·log10 where in dB. */
export function inWrittenUnit(value: number, { unit, inDecibels }: WrittenUnit): number {
  return inDecibels ? 20 * Math.log10(value) : value / unit.scale;
}

/** The text of the written unit; empty for a plain number. */
export function unitText({ unit, inDecibels }: WrittenUnit): string {
  if (inDecibels) return 'dB';
  return unit.text === '1' ? '' : oneLine(unit.text);
}

/**
 * An SI value in the written unit, for people: "31.4 %", "8.12 dB", "infinite". Where limits are given, it has as many
 * digits as it takes to stand on the right side of each, so that a broken limit never looks like a met one.
 */
export function formatValue(value: number, written: WrittenUnit, limits: readonly number[] = []): string {
  const own = inWrittenUnit(value, written);
  if (Number.isNaN(own)) return `${formatNumber(value)} (a ratio)`;
  let digits = usualDigits;
  while (digits < mostDigits && !limits.every((limit) => standsRight(value, limit, digits, written)))
    digits++;
  return withUnit(formatNumber(own, digits), own, written);
}

/** A limit in its unit, with the digits that a person may have written. */
export function formatLimit(limit: number, written: WrittenUnit): string {
  const own = inWrittenUnit(limit, written);
  return withUnit(limitNumber(limit, written), own, written);
}

/** The bare number of a limit in its unit. */
export function limitNumber(limit: number, written: WrittenUnit): string {
  return formatNumber(inWrittenUnit(limit, written), limitDigits);
}

/** Whether the value, rounded so, is on the same side of the limit as it is shown. */
function standsRight(value: number, limit: number, digits: number, written: WrittenUnit): boolean {
  const shown = Number(inWrittenUnit(value, written).toPrecision(digits));
  const shownLimit = Number(inWrittenUnit(limit, written).toPrecision(limitDigits));
  return Math.sign(shown - shownLimit) === Math.sign(value - limit);
}

function withUnit(text: string, own: number, written: WrittenUnit): string {
  const unit = unitText(written);
  return Number.isFinite(own) && unit !== '' ? `${text} ${unit}` : text;
}

/** What a measure gave, in full: the value with its unit, or why there is none. */
export function formatResult(
  result: MeasureResult,
  written: WrittenUnit,
  limits?: readonly number[],
): string {
  switch (result.kind) {
    case 'value':
      return formatValue(result.value, written, limits);
    case 'never':
    case 'overflow':
      return oneLine(result.why);
    case 'unformed':
      return `could not be formed: ${oneLine(result.why)}`;
  }
}

/** What a measure gave, in a few words for a column of a table. */
export function formatResultShort(
  result: MeasureResult,
  written: WrittenUnit,
  limits?: readonly number[],
): string {
  switch (result.kind) {
    case 'value':
      return formatValue(result.value, written, limits);
    case 'never':
      return 'never';
    case 'overflow':
      return `overflow at ${formatNumber(result.time)} s`;
    case 'unformed':
      return 'no value';
  }
}

/** Headroom (a share) as per cent; "none" where there is no number to take it from. */
export function formatHeadroom(headroom: number | undefined): string {
  return headroom === undefined ? 'none' : formatShare(headroom);
}

/** A share as per cent with three significant digits: 0.0321 is "3.21 %". */
export function formatShare(share: number): string {
  return `${formatNumber(share * 100, 3)} %`;
}

/** A count with its thousands set apart: "1,108". */
export function formatCount(count: number): string {
  return count.toLocaleString('en');
}

/** A count and its word: "1 plant", "1,108 plants". */
export function counted(count: number, one: string, many = `${one}s`): string {
  return `${formatCount(count)} ${count === 1 ? one : many}`;
}
