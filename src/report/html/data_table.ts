import { html, type Markup } from './markup.js';

/**
 * A table with a caption and headings; the first cell of a row heads it. It scrolls by itself where it is too wide.
 * @param numeric columns of numbers.
 * @param spare columns that are left out on a narrow screen.
 */
export function dataTable(
  caption: string,
  headings: readonly string[],
  rows: readonly (readonly string[])[],
  numeric: readonly number[] = [],
  spare: readonly number[] = [],
): Markup {
  const kind = (at: number): Markup | undefined => {
    const kinds = [numeric.includes(at) && 'number', spare.includes(at) && 'wide'].filter(Boolean).join(' ');
    return kinds === '' ? undefined : html` class="${kinds}"`;
  };
  const head = headings.map((heading, at) => html`<th scope="col"${kind(at)}>${heading}</th>`);
  const body = rows.map(
    ([first, ...cells]) =>
      html`<tr><th scope="row">${first}</th>${cells.map((cell, at) => html`<td${kind(at + 1)}>${cell}</td>`)}</tr>
`,
  );
  return html`<div class="scroll" role="region" aria-label="${caption}" tabindex="0"><table><caption>${caption}</caption><thead><tr>${head}</tr></thead><tbody>
${body}</tbody></table></div>`;
}

/** Pairs of a term and what is said of it; pairs with nothing said are left out. */
export function termList(pairs: readonly (readonly [string, string | Markup | undefined])[]): Markup {
  const rows = pairs
    .filter(([, said]) => said !== undefined && said !== '')
    .map(([term, said]) => html`<div><dt>${term}</dt><dd>${said}</dd></div>`);
  return html`<dl>${rows}</dl>`;
}
