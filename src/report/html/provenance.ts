import type { SpecRun } from '../../verdict/run.js';
import { formatCount, formatNumber, formatShare } from '../format_value.js';
import { originWord } from '../origin_in_words.js';
import { plantsInWords } from '../plants_in_words.js';
import { claimsInWords } from '../requirement_in_words.js';
import { runAgain } from '../run_again.js';
import { mergeInWords } from '../since_latched.js';
import { termList } from './data_table.js';
import { html, type Markup } from './markup.js';

/** Where the numbers of a spec come from, and how to get them again. */
export function provenanceSection(spec: SpecRun, version: string): Markup {
  const { provenance, plants, scenarios } = spec;
  const build = provenance?.build;
  const log = build?.output.trim()
    ? html`<details><summary>What the build printed</summary><pre tabindex="0">${build.output}</pre></details>`
    : undefined;
  return html`<h3>Where the numbers come from</h3>
${termList([
  ['spec', html`<code>${spec.file}</code>`],
  [
    provenance ? originWord(provenance) : 'image',
    provenance && html`<code>${provenance.image}</code>, ${formatCount(provenance.bytes)} bytes`,
  ],
  ['SHA-256', provenance && html`<code>${provenance.sha256}</code>`],
  ['names from', provenance?.symbols && html`<code>${provenance.symbols.image}</code>`],
  ['build id', provenance?.buildId && html`<code>${provenance.buildId}</code>`],
  ['compilers', provenance?.compilers.join('; ')],
  ['build', build && html`<code>${build.command.join(' ')}</code>, ${formatNumber(build.seconds, 3)} s`],
  ['build', provenance?.buildSkipped ? 'skipped: the image was taken as it is' : undefined],
  ['pawl', version],
  ['seed', String(spec.seed)],
  ['plants', plantsInWords(plants)],
  ['scenarios', scenarios.map(({ name, lasts }) => `${name} (${formatNumber(lasts)} s)`).join(', ')],
  ['step', `halved ${spec.halvings} ${spec.halvings === 1 ? 'time' : 'times'}`],
  ['merge', mergeInWords(spec)],
  ['judged in', `${formatNumber(spec.seconds, 3)} s`],
  ['run again', html`<code>${runAgain(spec)}</code>`],
])}${log}`;
}

/** What may be claimed with which confidence, each statement once. */
export function claimsSection(spec: SpecRun): Markup | undefined {
  const claims = claimsInWords(spec);
  if (claims.length === 0) return undefined;
  const items = claims.map(({ names, claim }) => html`<li><bdi>${names.join(', ')}</bdi>: ${claim}.</li>`);
  return html`<h3>What may be claimed</h3>
<p>With ${formatShare(spec.confidence)} confidence, from the independent plants alone; corners and other extra plants are not counted.</p>
<ul>${items}</ul>`;
}
