import type { RequirementRun, SpecRun } from '../../verdict/run.js';
import { formatHeadroom, formatResult } from '../format_value.js';
import { parameterHeadings, parameterRows } from '../parameter_table.js';
import { plantInWords } from '../plant_in_words.js';
import { limitStrip } from '../plot/limit_strip.js';
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
import { dataTable, termList } from './data_table.js';
import { plotFigures } from './figures.js';
import { html, type Markup } from './markup.js';
import { verdictBadge } from './sign.js';
import { attributionTable } from './since_latched.js';

/** Everything of one requirement: its verdict, its number against its limit, its plots, its worst plant. */
export function requirementArticle(
  requirement: RequirementRun,
  id: string,
  spec: SpecRun,
  plots: SpecPlots | undefined,
): Markup {
  const { name, verdict, reason, worst } = requirement;
  const figures = plotFigures(requirement, id, plots);
  const why = verdict.kind === 'met' ? undefined : html`<p class="why">${verdict.why}</p>`;
  return html`<article id="${id}" class="requirement ${verdict.kind}-side" aria-labelledby="${id}-h">
<h3 id="${id}-h">${verdictBadge(verdict.kind)} <bdi>${name}</bdi> <span class="measure">${measureInWords(requirement)}</span></h3>
${why}${reason && html`<p class="reason">${reason}</p>`}
<div class="columns"><div class="stack"><figure>${limitStrip(requirement, `${id}-s`)}<figcaption><span class="key nominal-key">nominal plant</span> <span class="key worst-key">worst plant</span> <span class="key fence-key">limit; ticks on the broken side</span></figcaption></figure>
${figures.filter((_, at) => at % 2 === 0)}</div><div class="stack">${numbers(requirement)}
${figures.filter((_, at) => at % 2 === 1)}</div></div>
${attributionTable(requirement, spec)}
${worst.parameters.length > 0 ? plantDetails(requirement) : undefined}
</article>
`;
}

function numbers(requirement: RequirementRun): Markup {
  const { limit, nominal, worst, claim, place } = requirement;
  const limits = limitNumbers(limit);
  const note = worst.result.kind === 'value' ? worst.result.note : undefined;
  return termList([
    ['limit', `${limitInWords(limit, requirement)}, ${holdsForInWords(requirement)}`],
    ['nominal', `${formatResult(nominal.result, requirement, limits)}${ratioBeside(requirement, nominal)}`],
    ['worst', `${formatResult(worst.result, requirement, limits)}${ratioBeside(requirement, worst)}`],
    ['', note],
    ['headroom', formatHeadroom(worst.headroom)],
    ['nearest to nominal', shrunkInWords(requirement)],
    ['reach', reachInWords(requirement)],
    ['matters most', effectsInWords(requirement)],
    ['proof', proofInWords(requirement)],
    ['since latched', comparisonInWords(requirement)],
    ['', headroomChange(requirement)],
    ['waiver', waiverInWords(requirement)],
    ['evidence', evidenceInWords(requirement)],
    ['claim', claim],
    ['written at', html`<code>${place.file}:${place.line}:${place.column}</code>`],
  ]);
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
${dataTable(`Parameters of the worst plant of ${name}`, parameterHeadings, parameterRows(worst), [1, 3])}</details>`;
}
