import type { FinishedRun, JudgedPlant, RequirementRun, SpecRun } from '../verdict/run.js';
import { caution } from './caution.js';
import type { Fault } from './fault.js';
import { counted, formatNumber, formatResult } from './format_value.js';
import { originWord } from './origin_in_words.js';
import { oneLine, shortened } from './plain_text.js';
import { plantInWords } from './plant_in_words.js';
import { plantsTried } from './plants_in_words.js';
import { warningsInWords } from './remarks_in_words.js';
import { claimsInWords, evidenceInWords, holdsForInWords, limitNumbers } from './requirement_in_words.js';
import { effortInWords, scrutinyLines, shrunkInWords } from './scrutiny_in_words.js';
import {
  attributionInWords,
  comparisonInWords,
  improvementsInWords,
  mergeInWords,
  waiverInWords,
} from './since_latched.js';
import { type Painter, painter } from './terminal_colour.js';
import { type RowWidths, rowLines, rowWidths, terminalHeadings, terminalRow } from './terminal_row.js';
import { blockingFirst, mayMerge, runInWords, verdictSigns } from './verdict_words.js';
import { whatToDo } from './what_to_do.js';
import { wrapText } from './wrap_text.js';

/** How a terminal is written to: whether in colour, and how many columns it has. */
export interface TerminalLook {
  colour: boolean;
  width: number;
}

const leastWidth = 80;
const mostWidth = 100;
const detailIndent = 4;
/** Longer texts lose their middle, so that one name cannot fill the screen. */
const longest = 400;

/**
 * The run as a table for a terminal: for each spec its verdicts, what blocks the merge first with the plant it breaks
 * on, then what may be claimed; the verdict on the whole and the caution at the end, where the eye is. Specs
 * that could not be run (`faults`) count against the merge; their messages are printed by who ran them.
 */
export function terminalReport(
  run: FinishedRun,
  { colour, width }: TerminalLook,
  faults: readonly Fault[] = [],
): string {
  const columns = Math.min(mostWidth, Math.max(leastWidth, Math.floor(width)));
  const paint = painter(colour);
  const passes = mayMerge(run, faults.length);
  const sign = verdictSigns[passes ? 'met' : 'broken'];
  return [
    ...run.specs.flatMap((spec) => [...specLines(spec, columns, paint), '']),
    paint(passes ? 'met' : 'broken', `${sign} ${runInWords(run, faults.length)}`),
    ...wrapText(caution, columns).map((line) => paint('quiet', line)),
    '',
  ].join('\n');
}

function specLines(spec: SpecRun, width: number, paint: Painter): string[] {
  const requirements = blockingFirst(spec.requirements);
  const rows = requirements.map(terminalRow);
  const widths = rowWidths([terminalHeadings, ...rows], width);
  return [
    paint('strong', shortened(oneLine(spec.loop), width)),
    ...about(spec).flatMap((text) => wrapText(text, width, 0, 2).map((line) => paint('quiet', line))),
    ...warningsInWords(spec)
      .flatMap((text) => wrapText(text, width, 0, 2))
      .map((line) => paint('strong', line)),
    '',
    ...rowLines(terminalHeadings, widths, (text) => text).map((line) => paint('quiet', line)),
    ...requirements.flatMap((requirement, at) =>
      requirementLines(requirement, spec, rows[at], widths, width, paint),
    ),
    '',
    ...closing(spec).flatMap((text) => wrapText(text, width, 0, 2)),
  ];
}

function about(spec: SpecRun): string[] {
  const { provenance, coefficients, scenarios } = spec;
  const image = provenance
    ? `${originWord(provenance)} ${shortened(oneLine(provenance.image), 60)} (SHA-256 ${provenance.sha256.slice(0, 12)})`
    : 'no image';
  const names = provenance?.symbols ? `, names from ${shortened(oneLine(provenance.symbols.image), 60)}` : '';
  const skipped = provenance?.buildSkipped ? ', taken as it is: the build was skipped' : '';
  return [
    shortened(oneLine(spec.file), 200),
    image + names + skipped,
    `${counted(coefficients.length, 'coefficient')}, ${counted(plantsTried(spec), 'plant')} tried in ${counted(scenarios.length, 'scenario')}, seed ${spec.seed}`,
  ];
}

function requirementLines(
  requirement: RequirementRun,
  spec: SpecRun,
  row: ReturnType<typeof terminalRow>,
  widths: RowWidths,
  width: number,
  paint: Painter,
): string[] {
  const lines = rowLines(row, widths, (text) => paint(requirement.verdict.kind, text));
  if (requirement.verdict.kind === 'met') return lines;
  return [
    ...lines,
    ...details(requirement, spec).flatMap((text) => wrapText(text, width, detailIndent, 2)),
    '',
  ];
}

/** What a reader of a blocked merge asks next: on which plant, why, how often, what for, and where it is written. */
function details(requirement: RequirementRun, spec: SpecRun): string[] {
  const { verdict, worst, reason, place, holdsFor } = requirement;
  const why = verdict.kind === 'met' ? [] : [oneLine(verdict.why)];
  const found = withoutNumber(worst, requirement);
  if (found !== undefined && !why.includes(found)) why.push(found);
  const nearest = shrunkInWords(requirement);
  const todo = whatToDo(requirement, spec);
  return [
    ...why.map((text) => shortened(text, longest)),
    `plant: ${shortened(plantInWords(worst), longest)}`,
    ...(nearest === undefined ? [] : [`nearest to nominal: ${shortened(nearest, longest)}`]),
    evidenceInWords(requirement) + (holdsFor === 'all' ? '' : `; must hold ${holdsForInWords(requirement)}`),
    ...(reason === undefined ? [] : [`reason: ${shortened(oneLine(reason), longest)}`]),
    ...sinceThen(requirement, spec),
    ...(todo === undefined ? [] : [`what to do: ${shortened(todo, longest)}`]),
    `${shortened(oneLine(place.file), 200)}:${place.line}:${place.column}`,
  ];
}

/** What the reference has to say: what the firmware and the spec changed, which coefficient did it, and a waiver. */
function sinceThen(requirement: RequirementRun, spec: SpecRun): string[] {
  const words = [
    comparisonInWords(requirement),
    ...attributionInWords(requirement, spec),
    waiverInWords(requirement),
  ];
  return words.flatMap((text) => (text === undefined ? [] : [shortened(text, longest)]));
}

/** What moved of the met requirements, each on a line. */
function movedButMet(spec: SpecRun): string[] {
  return spec.requirements.flatMap((requirement) => {
    const said = requirement.verdict.kind === 'met' ? comparisonInWords(requirement) : undefined;
    return said === undefined ? [] : [`${shortened(oneLine(requirement.name), 60)}: ${said}`];
  });
}

function withoutNumber({ result }: JudgedPlant, requirement: RequirementRun): string | undefined {
  if (result.kind === 'value') return result.note && oneLine(result.note);
  if (result.kind === 'unformed') return undefined;
  return formatResult(result, requirement, limitNumbers(requirement.limit));
}

function closing(spec: SpecRun): string[] {
  const claims = claimsInWords(spec).map(({ names, claim }) => {
    const all = names.length === spec.requirements.length && names.length > 1;
    return `${all ? 'each requirement' : shortened(names.join(', '), 120)}: ${oneLine(claim)}`;
  });
  const merge = mergeInWords(spec);
  const improvements = improvementsInWords(spec);
  const effort = effortInWords(spec);
  const tried =
    spec.triedSeconds === undefined
      ? undefined
      : `the plants alone in ${formatNumber(spec.triedSeconds, 3)} s`;
  return [
    ...claims,
    ...scrutinyLines(spec),
    ...(merge === undefined ? [] : [`merge: ${oneLine(merge)}`]),
    ...movedButMet(spec),
    ...(improvements === undefined ? [] : [improvements]),
    [`judged in ${formatNumber(spec.seconds, 3)} s`, tried, effort]
      .filter((part) => part !== undefined)
      .join('; '),
  ];
}
