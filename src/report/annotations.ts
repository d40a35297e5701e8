import type { FinishedRun, SpecRun } from '../verdict/run.js';
import type { Fault } from './fault.js';
import { portablePath } from './file_path.js';
import { oneLine, shortened } from './plain_text.js';
import { findingOnOneLine } from './requirement_in_words.js';
import {
  attributionInWords,
  changeInWords,
  comparisonInWords,
  shareText,
  waiverInWords,
} from './since_latched.js';
import { blockingFirst, blocksMerge } from './verdict_words.js';

/** A remark on a line of a source file. Line and column count from 1. */
export interface Annotation {
  level: 'error' | 'warning' | 'notice';
  file: string;
  line: number | undefined;
  column: number | undefined;
  title: string;
  message: string;
}

/** CI servers show so much of a message. */
const longest = 2000;

/**
 * An error on the spec's line for each requirement that blocks the merge, one on the line of each changed coefficient
 * that did it, and one for each cause why a spec could not be run; a warning for what is broken but waived, and for what guards nothing. Paths below `root`, the repository's folder, are written relative to it.
 */
export function annotationsOf(run: FinishedRun, faults: readonly Fault[] = [], root?: string): Annotation[] {
  const findings = run.specs.flatMap((spec) =>
    blockingFirst(spec.requirements)
      .filter(({ verdict }) => verdict.kind !== 'met')
      .map((requirement): Annotation => {
        const { place, name, verdict } = requirement;
        const waiver = waiverInWords(requirement);
        const since = [comparisonInWords(requirement), ...attributionInWords(requirement, spec), waiver];
        return {
          level: blocksMerge(requirement) ? 'error' : 'warning',
          file: portablePath(place.file, root),
          line: place.line,
          column: place.column,
          title: `${name} ${verdict.kind}`,
          message: [findingOnOneLine(requirement), ...since.filter((text) => text !== undefined)].join('; '),
        };
      }),
  );
  const idle = run.specs.flatMap(({ requirements }) =>
    requirements.flatMap(({ name, place, guardsNothing }): Annotation[] => {
      if (guardsNothing === undefined) return [];
      const at = { file: portablePath(place.file, root), line: place.line, column: place.column };
      return [{ level: 'warning', ...at, title: `${name} guards nothing`, message: guardsNothing }];
    }),
  );
  const causes = faults.flatMap(({ specFile, messages }) =>
    messages.map((message) => ofFault(specFile, message, root)),
  );
  const coefficients = run.specs.flatMap((spec) => coefficientAnnotations(spec, root));
  return [...causes, ...findings, ...coefficients, ...idle];
}

/** Changes with a smaller part of a loss get no annotation. */
const leastShare = 0.1;

/** One at the line of each changed coefficient that has its part in a requirement's blocking the merge. */
function coefficientAnnotations(spec: SpecRun, root: string | undefined): Annotation[] {
  const blocking = spec.requirements.filter(blocksMerge);
  return spec.coefficients.flatMap((read): Annotation[] => {
    const at = read.source ?? read.coefficient.declaredAt;
    const blames = blocking.flatMap(({ name, verdict, comparison }) =>
      (comparison?.attribution ?? [])
        .filter((row) => row.name === read.name && row.share >= leastShare)
        .map((row) => `${shareText(row, comparison!)} of the loss of ${name}, which is ${verdict.kind}`),
    );
    if (!at || blames.length === 0) return [];
    return [
      {
        level: 'error',
        file: portablePath(at.file, root),
        line: at.line,
        column: undefined,
        title: changeWords(read.name, spec),
        message: `${changeWords(read.name, spec)} accounts for ${blames.join(', ')}`,
      },
    ];
  });
}

function changeWords(name: string, { sinceLatched, coefficients }: SpecRun): string {
  const change = sinceLatched?.coefficients.find((one) => one.name === name);
  return change ? changeInWords(change, coefficients) : name;
}

/** A message that begins with `file:line:column: ` belongs to that place, any other to the spec as a whole. */
function ofFault(specFile: string, text: string, root: string | undefined): Annotation {
  const placed = /^(?<file>[^\n]+?):(?<line>\d+):(?<column>\d+): (?<message>.*)$/s.exec(text)?.groups;
  return {
    level: 'error',
    file: portablePath(placed?.file ?? specFile, root),
    line: placed && Number(placed.line),
    column: placed && Number(placed.column),
    title: 'pawl could not run',
    message: placed?.message ?? text,
  };
}

/** An annotation as the line by which a job tells GitHub Actions of it; no text in it can end the line or begin another. */
export function workflowCommand({ level, file, line, column, title, message }: Annotation): string {
  const properties = Object.entries({ file, line, col: column, title })
    .filter(([, value]) => value !== undefined)
    .map(([key, value]) => `${key}=${escapedProperty(shortened(oneLine(String(value)), longest))}`);
  return `::${level} ${properties.join(',')}::${escapedData(shortened(oneLine(message), longest))}`;
}

/** Escapes as the runner reads them back; line ends are not there any more. */
function escapedData(text: string): string {
  return text.replaceAll('%', '%25');
}

function escapedProperty(text: string): string {
  return escapedData(text).replaceAll(':', '%3A').replaceAll(',', '%2C');
}

/** All annotations of a run as workflow commands, one a line. */
export function annotationLines(run: FinishedRun, faults: readonly Fault[] = [], root?: string): string {
  return annotationsOf(run, faults, root)
    .map((one) => `${workflowCommand(one)}\n`)
    .join('');
}
