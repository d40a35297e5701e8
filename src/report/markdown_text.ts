import { oneLine } from './plain_text.js';

/** Characters with a meaning in GitHub Flavored Markdown or in the HTML that it may hold. */
const special = /[\\`*_{}[\]<>()#+!|&~$:@]/g;

/**
 * A text from outside as Markdown that shows just that text: on one line, every special character written as an
 * entity (CommonMark 0.31, section 2.5: an entity is never structure). Nor does it begin a list, an
 * underline or a block of code. A joiner keeps `@` and `#` from being taken for
 * mentions and references, which are looked for after entities are read.
 */
export function markdownText(text: string): string {
  return oneLine(text)
    .replace(special, (character) => `&#${character.charCodeAt(0)};${/[@#]/.test(character) ? '\u2060' : ''}`)
    .replace(/^[-= ]|(?<=^\d+)[.)](?= |$)/g, (character) => `&#${character.charCodeAt(0)};`)
    .replace(/\b(www)\./gi, '$1&#46;')
    .replace(/\b(GH)-(?=\d)/gi, '$1-\u2060');
}

/** A table of GitHub Flavored Markdown; cells are Markdown already and stand on one line. */
export function markdownTable(
  headings: readonly string[],
  rows: readonly (readonly string[])[],
  right: readonly number[] = [],
): string {
  const line = (cells: readonly string[]): string => `| ${cells.join(' | ')} |`;
  const rule = headings.map((_, at) => (right.includes(at) ? '---:' : '---'));
  return [line(headings), line(rule), ...rows.map(line)].join('\n');
}
