import type { RequirementRun, SpecRun } from '../../verdict/run.js';
import { formatHeadroom, formatResult } from '../format_value.js';
import { parameterHeadings, parameterRows } from '../parameter_table.js';
import { plantInWords } from '../plant_in_words.js';
import { isLatchedShown, limitStrip } from '../plot/limit_strip.js';
import type { SpecPlots } from '../plots.js';
import {
  evidenceInWords,
  holdsForInWords,
  limitInWords,
  limitNumbers,
  measureInWords,
} from '../requirement_in_words.js';
import { effectsInWords, proofInWords, reachInWords, shrunkInWords } from '../scrutiny_in_words.js';
import { comparisonInWords, headroomChange, waiverInWords } from '../since_latched.js';
import { whatToDo } from '../what_to_do.js';
import { dataTable, termList } from './data_table.js';
import { elsewhere, type Figure, plotFigures } from './figures.js';
import { html, type Markup } from './markup.js';
import { verdictBadge } from './sign.js';
import { attributionTable } from './since_latched.js';
import { twoColumns } from './two_columns.js';

/** Everything of one requirement: its verdict, its number against its limit, its plots, its worst plant. */
export function requirementArticle(
  requirement: RequirementRun,
  id: string,
  spec: SpecRun,
  plots: SpecPlots | undefined,
  idOf: (name: string) => string | undefined = () => undefined,
): Markup {
  const { name, verdict, reason, worst } = requirement;
  const columns = twoColumns(
    strip(requirement, id),
    numbers(requirement, spec),
    plotFigures(requirement, id, plots),
  );
  const why = verdict.kind === 'met' ? undefined : html`<p class="why">${verdict.why}</p>`;
  return html`<article id="${id}" class="requirement ${verdict.kind}-side" aria-labelledby="${id}-h">
<h3 id="${id}-h">${verdictBadge(verdict.kind)} <bdi>${name}</bdi> <span class="measure">${measureInWords(requirement)}</span></h3>
${why}${reason && html`<p class="reason">${reason}</p>`}
${columns}
${elsewhere(requirement, plots, idOf)}
${attributionTable(requirement, spec)}
${worst.parameters.length > 0 ? plantDetails(requirement) : undefined}
</article>
`;
}

function strip(requirement: RequirementRun, id: string): Figure {
  const latched = isLatchedShown(requirement)
    ? html` <span class="key latched-key">latched coefficients, their worst</span>`
    : undefined;
  const caption = html`<span class="key nominal-key">nominal plant</span> <span class="key worst-key">worst plant</span>${latched} <span class="key fence-key">limit; ticks on the broken side</span>`;
  return {
    markup: html`<figure>${limitStrip(requirement, `${id}-s`)}<figcaption>${caption}</figcaption></figure>`,
    height: latched ? 150 : 125,
  };
}

function numbers(requirement: RequirementRun, spec: SpecRun): Figure {
  const said = terms(requirement, spec);
  const rows = said.map(([, text]) =>
    Math.ceil((typeof text === 'string' ? text.length : 0) / charactersOfRow),
  );
  return { markup: termList(said), height: rows.reduce((sum, lines) => sum + 6 + 24 * lines, 0) };
}

/** Of a text beside its term. */
const charactersOfRow = 46;

function terms(requirement: RequirementRun, spec: SpecRun): [string, string | Markup | undefined][] {
  const { limit, nominal, worst, claim, place } = requirement;
  const limits = limitNumbers(limit);
  const effects = effectsInWords(requirement);
  const since = [comparisonInWords(requirement), headroomChange(requirement)].filter(
    (one) => one !== undefined,
  );
  const note = worst.result.kind === 'value' ? worst.result.note : undefined;
  return [
    ['limit', `${limitInWords(limit, requirement)}, ${holdsForInWords(requirement)}`],
    ['nominal', `${formatResult(nominal.result, requirement, limits)}${ratioBeside(requirement, nominal)}`],
    ['worst', `${formatResult(worst.result, requirement, limits)}${ratioBeside(requirement, worst)}`],
    ['', note],
    ['headroom', formatHeadroom(worst.headroom)],
    ['nearest to nominal', shrunkInWords(requirement)],
    ['reach', reachInWords(requirement)],
    ['matters most', effects && `${effects} points of headroom`],
    ['proof', proofInWords(requirement)],
    ['since latched', since.length > 0 ? since.join('; ') : undefined],
    ['waiver', waiverInWords(requirement)],
    ['evidence', evidenceInWords(requirement)],
    ['claim', claim],
    ['what to do', whatToDo(requirement, spec)],
    ['written at', html`<code>${place.file}:${place.line}:${place.column}</code>`],
  ];
}

/** A value in dB as the plain ratio that it is. */
function ratioBeside({ inDecibels }: RequirementRun, { result }: RequirementRun['worst']): string {
  if (!inDecibels || result.kind !== 'value' || !Number.isFinite(result.value)) return '';
  return ` (a factor of ${Number(result.value.toPrecision(4))})`;
}

function plantDetails(requirement: RequirementRun): Markup {
  const { verdict, worst, name, evidence } = requirement;
  const which = evidence.kind === 'nominal_only' ? 'Plant' : 'Worst plant';
  const open = verdict.kind === 'broken' ? html` open` : undefined;
  return html`<details${open}><summary>${which}: ${plantInWords(worst)}</summary>
${dataTable(`Parameters of the worst plant of ${name}`, parameterHeadings, parameterRows(worst), [1, 3], [3])}</details>`;
}
