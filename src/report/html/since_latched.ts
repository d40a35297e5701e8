import type { RequirementRun, SpecRun } from '../../verdict/run.js';
import { formatNumber } from '../format_value.js';
import { changeInWords, playerInWords, shareText, sourceInWords } from '../since_latched.js';
import { dataTable } from './data_table.js';
import { html, type Markup } from './markup.js';

/** Which changed coefficients lost the headroom: rows, the largest share first, each with one bar. */
export function attributionTable({ name, comparison }: RequirementRun, spec: SpecRun): Markup | undefined {
  if (!comparison || comparison.attribution.length === 0) return undefined;
  const rows = comparison.attribution.map(
    (row) =>
      html`<tr><th scope="row">${playerInWords(row, spec)}</th><td>${bar(row.share)}</td><td class="number">${shareText(row, comparison)}</td><td class="wide number">${formatNumber(row.lost * 100, 3)}</td></tr>
`,
  );
  const sampled = comparison.sampledOrders;
  const how = sampled === undefined ? '' : `, sampled from ${sampled} orders of the changes`;
  return html`<div class="scroll" role="region" aria-label="What lost the headroom of ${name}" tabindex="0"><table class="losses"><caption>What lost the headroom of ${name}${how}</caption><thead><tr><th scope="col">changed since the latched reference</th><th scope="col" colspan="2">share of the loss</th><th scope="col" class="wide number">points of headroom</th></tr></thead><tbody>
${rows}</tbody></table></div>`;
}

/** A bar from zero, to the left where the change gained headroom. */
function bar(share: number): Markup {
  const width = Math.min(1, Math.abs(share)) * 80;
  const from = share < 0 ? 20 - Math.min(20, width) : 20;
  return html`<svg class="share" viewBox="0 0 100 12" aria-hidden="true" focusable="false"><rect class="${share < 0 ? 'gained' : 'lost'}" x="${from}" y="2" width="${share < 0 ? Math.min(20, width) : width}" height="8"/><path class="axis" d="M20 0V12"/></svg>`;
}

/** Coefficients whose numbers are not the latched ones, old and new. */
export function changedCoefficients({ sinceLatched, coefficients }: SpecRun): Markup | undefined {
  if (!sinceLatched || sinceLatched.coefficients.length === 0) return undefined;
  const rows = sinceLatched.coefficients.map((change) => {
    const read = coefficients.find(({ name }) => name === change.name);
    return [change.name, changeInWords(change, coefficients), (read && sourceInWords(read)) ?? ''];
  });
  return html`<h3>Coefficients changed since the latched reference</h3>
${dataTable('Latched and today', ['name', 'latched → today', 'written at'], rows)}`;
}
