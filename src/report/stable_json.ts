/** A value of JSON; what has no number stands as a word. */
export type Json = string | number | boolean | null | Json[] | { [key: string]: Json };

/** Characters that act unseen in an editor or on a terminal; JSON may carry them escaped (RFC 8259, section 7). */
const unseen = /[\u007f-\u009f\u061c\u200e\u200f\u2028-\u202e\u2066-\u2069\ufeff\ufffe\uffff]/g;

/** JSON text with sorted keys, two blanks of indentation and a line end: one value a line, for comparing by line. */
export function stableJson(value: Json): string {
  const text = JSON.stringify(sorted(value), undefined, 2);
  return `${text.replace(unseen, (one) => `\\u${one.charCodeAt(0).toString(16).padStart(4, '0')}`)}\n`;
}

/** A number as JSON can hold it: "infinite", "minus infinite" and "not a number" as words, 0 without a sign. */
export function jsonNumber(value: number): Json {
  if (Number.isFinite(value)) return value + 0;
  if (Number.isNaN(value)) return 'not a number';
  return value > 0 ? 'infinite' : 'minus infinite';
}

function sorted(value: Json): Json {
  if (Array.isArray(value)) return value.map(sorted);
  if (value === null || typeof value !== 'object') return value;
  const keys = Object.keys(value).sort((a, b) => (a < b ? -1 : a > b ? 1 : 0));
  return Object.fromEntries(keys.map((key) => [key, sorted(value[key])]));
}
