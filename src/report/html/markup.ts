import { visible } from '../plain_text.js';

/** Text that is markup already and is not escaped again. Only the `html` template makes it. */
export class Markup {
  constructor(readonly text: string) {}
}

/** What may stand in a template: texts and numbers are escaped, markup is not, nothing gives nothing. */
export type Part = string | number | Markup | readonly Part[] | undefined;

/**
 * A piece of HTML or SVG. Every text that is put in is made visible and escaped, in elements and quoted attributes alike,
 * so that no name can become markup. A number and its per cent sign stay on one line.
 */
export function html(pieces: TemplateStringsArray, ...parts: Part[]): Markup {
  return new Markup(pieces.reduce((text, piece, at) => text + textOf(parts[at - 1]) + piece));
}

function textOf(part: Part): string {
  if (part === undefined) return '';
  if (part instanceof Markup) return part.text;
  if (typeof part === 'string') return escaped(part);
  if (typeof part === 'number') return String(part);
  return part.map(textOf).join('');
}

const entities: Readonly<Record<string, string>> = {
  '&': '&amp;',
  '<': '&lt;',
  '>': '&gt;',
  '"': '&quot;',
  "'": '&#39;',
};

function escaped(text: string): string {
  return visible(text)
    .replace(/(?<=\d) (?=%)/g, '\u00a0')
    .replace(/[&<>"']/g, (character) => entities[character]);
}
