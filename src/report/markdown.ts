import type { FinishedRun, RequirementRun, SpecRun } from '../verdict/run.js';
import { caution } from './caution.js';
import type { DrawingFile } from './drawing_files.js';
import type { Fault } from './fault.js';
import { counted, formatHeadroom, formatNumber, formatResultShort } from './format_value.js';
import { markdownTable, markdownText } from './markdown_text.js';
import { originWord } from './origin_in_words.js';
import { oneLine, shortened } from './plain_text.js';
import { plantInWords } from './plant_in_words.js';
import { plantsTried } from './plants_in_words.js';
import { warningsInWords } from './remarks_in_words.js';
import { claimsInWords, limitInWords, limitNumbers, measureWithSignal } from './requirement_in_words.js';
import { shrunkInWords } from './scrutiny_in_words.js';
import {
  attributionInWords,
  comparisonInWords,
  improvementsInWords,
  mergeInWords,
  waiverInWords,
} from './since_latched.js';
import { blockingFirst, runInWords, verdictSigns } from './verdict_words.js';
import { whatToDo } from './what_to_do.js';

/** A comment on a pull request holds 65,536 characters; so many leave room for what stands around it. */
const mostCharacters = 60_000;
const mostMessages = 10;

/**
 * The run for a comment on a pull request or a job's summary: the verdict, what blocks the merge with the plant it
 * breaks on, the met requirements folded away, what may be claimed, and the caution.
 * @param drawn files that stand beside it, one list for each spec.
 */
export function markdownSummary(
  run: FinishedRun,
  faults: readonly Fault[] = [],
  drawn: readonly DrawingFile[][] = [],
): string {
  const head = `## pawl: ${runInWords(run, faults.length)}`;
  const parts = [
    head,
    ...faults.map(faultPart),
    ...run.specs.map((spec, at) => specPart(spec, drawn[at] ?? [])),
  ];
  const foot = `<sub>${markdownText(caution)}</sub>\n`;
  let room = mostCharacters - foot.length;
  const shown = parts.filter((part) => {
    room -= part.length + 2;
    return room > 0;
  });
  const left = parts.length - shown.length;
  if (left > 0) shown.push(`${counted(left, 'more spec')} did not fit here; see the full report.`);
  return [...shown, foot].join('\n\n');
}

function faultPart({ specFile, messages }: Fault): string {
  const lines = messages.slice(0, mostMessages).map((message) => `- ${said(message, 400)}`);
  const left = messages.length - lines.length;
  if (left > 0) lines.push(`- and ${left} more`);
  return `### ${said(specFile, 120)} could not be run\n\n${lines.join('\n')}`;
}

function specPart(spec: SpecRun, drawn: readonly DrawingFile[]): string {
  const { provenance } = spec;
  const blocking = blockingFirst(spec.requirements).filter(({ verdict }) => verdict.kind !== 'met');
  const merge = mergeInWords(spec);
  const improvements = improvementsInWords(spec);
  const met = spec.requirements.filter(({ verdict }) => verdict.kind === 'met');
  const image = provenance
    ? `${originWord(provenance)} ${said(provenance.image, 80)} (SHA-256 ${provenance.sha256.slice(0, 12)})${provenance.buildSkipped ? ', build skipped' : ''}`
    : 'no image';
  return [
    `### ${said(spec.loop, 120)}`,
    blocking.length > 0
      ? `${table(blocking)}\n\n${blocking.map((one) => detail(one, spec, drawn)).join('\n')}`
      : '',
    met.length > 0 ? folded(`${counted(met.length, 'requirement')} met`, table(met)) : '',
    warningsInWords(spec)
      .map((text) => `- ${said(text, 200)}`)
      .join('\n'),
    claimsInWords(spec)
      .map(({ names, claim }) => `- ${said(names.join(', '), 120)}: ${said(claim, 300)}`)
      .join('\n'),
    merge === undefined ? '' : `Merge: ${said(merge, 800)}.`,
    movedButMet(spec),
    improvements === undefined ? '' : said(improvements, 300),
    `${said(spec.file, 120)}, ${image}, ${counted(plantsTried(spec), 'plant')} tried, seed ${spec.seed}, judged in ${formatNumber(spec.seconds, 3)} s`,
  ]
    .filter((part) => part !== '')
    .join('\n\n');
}

function table(requirements: readonly RequirementRun[]): string {
  return markdownTable(headings, requirements.map(cells), numeric);
}

/** What is asked next of a requirement that blocks: where it is written, why, on which plant, and what it is for. */
function detail(requirement: RequirementRun, spec: SpecRun, drawn: readonly DrawingFile[]): string {
  const { name, place: written, verdict, worst, reason } = requirement;
  const why = verdict.kind === 'met' ? [] : [verdict.why];
  if (worst.result.kind !== 'value' && !why.includes(worst.result.why)) why.push(worst.result.why);
  if (worst.result.kind === 'value' && worst.result.note !== undefined) why.push(worst.result.note);
  const since = [
    comparisonInWords(requirement),
    ...attributionInWords(requirement, spec),
    waiverInWords(requirement),
  ];
  const nearest = shrunkInWords(requirement);
  const todo = whatToDo(requirement, spec);
  const head = [...why, ...since].flatMap((text) => (text === undefined ? [] : [said(text, 300)]));
  const below = [
    ...(nearest === undefined ? [] : [`nearest to nominal: ${said(nearest, 300)}`]),
    `worst plant: ${said(plantInWords(worst), 400)}`,
    ...(reason === undefined ? [] : [`reason: ${said(reason, 300)}`]),
    ...(todo === undefined ? [] : [`what to do: ${said(todo, 400)}`]),
    ...drawn
      .filter((file) => file.requirement === name)
      .map(({ path, lines }) => `drawn in \`${path}\`${lines ? `: ${lines}` : ''}`),
  ];
  const place = `${said(written.file, 120)}, line ${written.line}`;
  return [
    `- **${said(name, 60)}** (${place}): ${head.join('; ')}`,
    ...below.map((line) => `  - ${line}`),
  ].join('\n');
}

/** What moved of the met requirements since the latched reference. */
function movedButMet({ requirements }: SpecRun): string {
  return requirements
    .filter(({ verdict }) => verdict.kind === 'met')
    .flatMap((requirement) => {
      const text = comparisonInWords(requirement);
      return text === undefined ? [] : [`- ${said(requirement.name, 60)}: ${said(text, 300)}`];
    })
    .join('\n');
}

const headings = ['verdict', 'name', 'measure', 'limit', 'nominal', 'worst', 'headroom'];
const numeric = [4, 5, 6];

function cells(requirement: RequirementRun): string[] {
  const { verdict, name, limit, nominal, worst } = requirement;
  const limits = limitNumbers(limit);
  return [
    `${verdictSigns[verdict.kind]} **${verdict.kind}**`,
    said(name, 60),
    said(measureWithSignal(requirement), 80),
    said(limitInWords(limit, requirement), 80),
    said(formatResultShort(nominal.result, requirement, limits), 60),
    said(formatResultShort(worst.result, requirement, limits), 60),
    formatHeadroom(worst.headroom),
  ];
}

function folded(summary: string, content: string): string {
  return `<details><summary>${summary}</summary>\n\n${content}\n\n</details>`;
}

function said(text: string, most: number): string {
  return markdownText(shortened(oneLine(text), most));
}
