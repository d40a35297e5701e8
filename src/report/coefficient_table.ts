import type { Coefficient, NumberFormat, StoredElement } from '../firmware/coefficient.js';
import type { CoefficientRead } from '../verdict/run.js';
import { counted, formatNumber } from './format_value.js';
import { oneLine, shortened } from './plain_text.js';
import { textTable } from './text_table.js';

/** Beyond so many elements of one array the table says how many more there are. */
const mostElements = 32;
const mostOfAName = 48;

/** The headings of a table of coefficients. */
export const coefficientHeadings = [
  'name',
  'where in the build',
  'value',
  'type',
  'stored bits',
  'address',
  'declared at',
];

/** Coefficients as a table of plain text: one row for each number, an array's rows below one another. */
export function coefficientTable(coefficients: readonly CoefficientRead[]): string {
  if (coefficients.length === 0) return 'no coefficients\n';
  return `${textTable([coefficientHeadings, ...coefficients.flatMap((one) => coefficientRows(one))])}\n`;
}

/** Coefficients without names of their own as a table: the places in the build, each with its number. */
export function placeTable(coefficients: readonly Coefficient[]): string {
  const rows = coefficients.flatMap((coefficient) =>
    coefficientRows({ name: '', unit: undefined, coefficient }),
  );
  const places = rows.map(([name, place, ...others]) => [place || name, ...others]);
  return `${textTable([coefficientHeadings.slice(1), ...places])}\n`;
}

/** The rows of one coefficient, cells as in the headings. */
export function coefficientRows(read: Omit<CoefficientRead, 'place'>): string[][] {
  const { coefficient, name } = read;
  const { elements, shape, path, declaredAt } = coefficient;
  const rows = elements.slice(0, mostElements).map((element, at) => {
    const index = indexText(at, shape);
    return [
      shortened(oneLine(name), mostOfAName) + index,
      shortened(oneLine(path), mostOfAName) + index,
      elementText(element, read),
      at === 0
        ? shortened(oneLine(coefficient.type), mostOfAName) + (coefficient.scaling ? ', scaled' : '')
        : '',
      element.stored,
      addressText(element.address),
      at === 0 && declaredAt ? shortened(`${oneLine(declaredAt.file)}:${declaredAt.line}`, mostOfAName) : '',
    ];
  });
  const left = elements.length - mostElements;
  return left > 0 ? [...rows, [`and ${counted(left, 'more number')}`, '', '', '', '', '', '']] : rows;
}

/** A stored number for people, with its unit, the name an enumeration gives it, and what is odd about it. */
function elementText(element: StoredElement, { unit, coefficient }: Omit<CoefficientRead, 'place'>): string {
  const number = coefficient.scaling
    ? formatNumber(element.value, 9)
    : storedNumber(element.value, coefficient.format);
  const parts = [number, unit?.text ? oneLine(unit.text) : ''];
  if (element.enumerator !== undefined) parts.push(`(${oneLine(element.enumerator)})`);
  if (element.remark !== undefined) parts.push(`(${element.remark.replaceAll('_', ' ')})`);
  return parts.filter((part) => part !== '').join(' ');
}

/**
 * The shortest decimal number that the format stores as the same bits: 0.3 for the float32 next to it. Integers and
 * fixed-point numbers are exact in decimal and are written in full.
 */
export function storedNumber(value: number, format: NumberFormat): string {
  if (!Number.isFinite(value)) return formatNumber(value);
  if (format.kind !== 'float' || format.bits === 64) return String(value + 0);
  for (let digits = 1; digits < 9; digits++) {
    const shorter = Number(value.toPrecision(digits));
    if (Math.fround(shorter) === value) return String(shorter + 0);
  }
  return formatNumber(value, 9);
}

/** The index of the element at this place of a flattened array, last index fastest: "[1][0]". */
export function indexText(at: number, shape: readonly number[]): string {
  let left = at;
  return shape.reduceRight((text, length) => {
    const index = left % length;
    left = Math.floor(left / length);
    return `[${index}]${text}`;
  }, '');
}

function addressText(address: number | undefined): string {
  return address === undefined ? '' : `0x${address.toString(16).padStart(8, '0')}`;
}
