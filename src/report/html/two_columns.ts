import type { Figure } from './figures.js';
import { html, type Markup } from './markup.js';

/**
 * A page part in two columns, each begun by something of its own: every figure goes where there is more room left, so that
 * neither stays empty. On a narrow screen the figures come after both beginnings, in their order.
 */
export function twoColumns(left: Figure, right: Figure, figures: readonly Figure[]): Markup {
  const columns = [left, right].map(({ markup, height }) => ({ content: [markup], height }));
  figures.forEach(({ markup, height }, at) => {
    const place = columns[0].height <= columns[1].height ? columns[0] : columns[1];
    place.content.push(html`<div class="plot" style="order:${at + 1}">${markup}</div>`);
    place.height += height;
  });
  return html`<div class="columns">${columns.map(({ content }) => html`<div class="stack">${content}</div>`)}</div>`;
}
