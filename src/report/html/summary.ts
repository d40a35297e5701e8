import type { RequirementRun, SpecRun } from '../../verdict/run.js';
import { formatHeadroom, formatResultShort } from '../format_value.js';
import { oneLine, shortened } from '../plain_text.js';
import { limitInWords, limitNumbers, measureWithSignal } from '../requirement_in_words.js';
import { blockingFirst } from '../verdict_words.js';
import { html, type Markup } from './markup.js';
import { verdictBadge } from './sign.js';

/** The requirements of a spec as a table, what blocks the merge first; each name leads to its article. */
export function summaryTable(spec: SpecRun, idOf: (requirement: RequirementRun) => string): Markup {
  const rows = blockingFirst(spec.requirements).map((requirement) => row(requirement, idOf(requirement)));
  return html`<div class="scroll" role="region" aria-label="Requirements of ${spec.loop}" tabindex="0"><table class="summary">
<thead><tr><th scope="col">verdict</th><th scope="col">name</th><th scope="col" class="wide">measure</th><th scope="col" class="wide">limit</th><th scope="col" class="wide number">nominal</th><th scope="col" class="number">worst</th><th scope="col" class="number">headroom</th></tr></thead>
<tbody>${rows}</tbody></table></div>`;
}

function row(requirement: RequirementRun, id: string): Markup {
  const { verdict, name, limit, nominal, worst } = requirement;
  const limits = limitNumbers(limit);
  return html`<tr><td>${verdictBadge(verdict.kind)}</td><th scope="row"><a href="#${id}"><bdi>${shortened(oneLine(name), 60)}</bdi></a></th><td class="wide">${measureWithSignal(requirement)}</td><td class="wide">${limitInWords(limit, requirement)}</td><td class="wide number">${formatResultShort(nominal.result, requirement, limits)}</td><td class="number">${formatResultShort(worst.result, requirement, limits)}</td><td class="number">${formatHeadroom(worst.headroom)}</td></tr>
`;
}
