import type { FinishedRun, RequirementRun, SpecRun } from '../verdict/run.js';
import { caution } from './caution.js';
import { coefficientHeadings, coefficientRows } from './coefficient_table.js';
import type { Fault } from './fault.js';
import { counted } from './format_value.js';
import { dataTable } from './html/data_table.js';
import { html, Markup } from './html/markup.js';
import { claimsSection, provenanceSection } from './html/provenance.js';
import { requirementArticle } from './html/requirement_article.js';
import { verdictBadge } from './html/sign.js';
import { changedCoefficients } from './html/since_latched.js';
import { style } from './html/style.js';
import { summaryTable } from './html/summary.js';
import { oneLine, shortened } from './plain_text.js';
import { plantsTried } from './plants_in_words.js';
import type { ReportPlots, SpecPlots } from './plots.js';
import { warningsInWords } from './remarks_in_words.js';
import { blockingFirst, mayMerge, runInWords } from './verdict_words.js';

/** What stands beside a run in its report. */
export interface ReportExtras {
  /** What to draw; without it the report has the numbers only. */
  plots?: ReportPlots;
  /** Specs that could not be run. */
  faults?: readonly Fault[];
}

/** Nothing but the page itself: no scripts, nothing fetched. */
const policy = "default-src 'none'; style-src 'unsafe-inline'";

/**
 * The run as one self-contained page for a reviewer with ten minutes: the verdict first, then each requirement's number
 * against its limit, the coefficients, what may be claimed, where the numbers come from, and the caution.
 */
export function htmlReport(run: FinishedRun, { plots, faults = [] }: ReportExtras = {}): string {
  const said = runInWords(run, faults.length);
  const kind = mayMerge(run, faults.length) ? 'met' : 'broken';
  const title = shortened([said, ...run.specs.map(({ loop }) => oneLine(loop))].join(', '), 120);
  return html`<!doctype html>
<html lang="en-GB"><head><meta charset="utf-8"><meta name="viewport" content="width=device-width,initial-scale=1"><meta http-equiv="Content-Security-Policy" content="${policy}"><title>${title}</title><style>${new Markup(style)}</style></head>
<body><a class="skip" href="#verdict">To the verdict</a>
<header><h1 id="verdict">${verdictBadge(kind, said)}</h1>${lead(run)}</header>
<main>${faultList(faults)}${run.specs.map((spec, at) => specSection(spec, `s${at + 1}`, run.version, plots?.specs[at]))}</main>
<footer><p class="caution">${caution}</p><p class="about">pawl ${run.version}</p></footer></body></html>
`.text;
}

function lead({ specs }: FinishedRun): Markup {
  const plants = specs.reduce((sum, spec) => sum + plantsTried(spec), 0);
  return html`<p class="lead">${counted(specs.length, 'spec')}, ${counted(plants, 'plant')} tried.</p>`;
}

function faultList(faults: readonly Fault[]): Markup | undefined {
  if (faults.length === 0) return undefined;
  const items = faults.map(
    ({ specFile, messages }) =>
      html`<li><code>${specFile}</code>${messages.map((message) => html`<p>${message}</p>`)}</li>`,
  );
  return html`<h2>Could not be run</h2><ul class="faults">${items}</ul>`;
}

function specSection(spec: SpecRun, id: string, version: string, plots: SpecPlots | undefined): Markup {
  const idOf = (requirement: RequirementRun): string =>
    `${id}-r${spec.requirements.indexOf(requirement) + 1}`;
  const idOfNamed = (name: string): string | undefined => {
    const named = spec.requirements.find((one) => one.name === name);
    return named && idOf(named);
  };
  const articles = blockingFirst(spec.requirements).map((one) =>
    requirementArticle(one, idOf(one), spec, plots, idOfNamed),
  );
  return html`<section aria-labelledby="${id}">
<h2 id="${id}"><bdi>${spec.loop}</bdi></h2><p class="about"><code>${spec.file}</code></p>
${summaryTable(spec, idOf)}
${articles}
${changedCoefficients(spec)}
${coefficients(spec)}
${claimsSection(spec)}
${provenanceSection(spec, version)}
</section>
`;
}

function coefficients(spec: SpecRun): Markup | undefined {
  if (spec.coefficients.length === 0) return undefined;
  const rows = spec.coefficients.flatMap(coefficientRows);
  const warnings = warningsInWords(spec).map((text) => html`<p>${text}</p>`);
  return html`<h3>Coefficients of the build</h3>
${warnings}
${dataTable('As stored in the build', coefficientHeadings, rows, [2])}`;
}
