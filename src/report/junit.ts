import library, { type Builder, type TestCase, type TestSuite } from 'junit-report-builder';
import type { FinishedRun, RequirementRun, SpecRun } from '../verdict/run.js';
import { caution } from './caution.js';
import type { Fault } from './fault.js';
import { counted, formatHeadroom, formatResult } from './format_value.js';
import { parameterTable } from './parameter_table.js';
import { oneLine, visible } from './plain_text.js';
import { plantInWords } from './plant_in_words.js';
import { plantsTried } from './plants_in_words.js';
import { warningsInWords } from './remarks_in_words.js';
import {
  evidenceInWords,
  findingOnOneLine,
  limitInWords,
  limitNumbers,
  measureInWords,
  measureName,
} from './requirement_in_words.js';
import { runAgain } from './run_again.js';
import { effectsInWords, proofInWords, reachInWords, shrunkInWords } from './scrutiny_in_words.js';
import {
  attributionInWords,
  comparisonInWords,
  headroomChange,
  mergeInWords,
  waiverInWords,
} from './since_latched.js';
import { blocksMerge } from './verdict_words.js';
import { whatToDo } from './what_to_do.js';

/** Node loads the library as CommonJS, whose whole export is the builder; its types describe it as an ES module. */
const junit = library as unknown as Builder;

/**
 * A run as JUnit XML: a suite for each spec, a case for each requirement. Broken and slipped are a `failure`, unjudged an `error`,
 * broken but waived is `skipped`;
 * specs which could not be run at all come as suites with one case that is an `error`. Names stay the same from run to
 * run; `time` is the spec's wall time in s, shared evenly over its cases.
 */
export function junitOf(run: FinishedRun, faults: readonly Fault[] = []): string {
  const builder = junit.newBuilder().name('pawl');
  for (const spec of run.specs) addSpec(builder, spec, run.version);
  for (const fault of faults) addFault(builder, fault);
  return builder.build();
}

/** JUnit XML for a spec that could not be run: bad spec, missing symbol, failed build. */
export function junitOfFault(specFile: string, messages: readonly string[]): string {
  return junitOf({ version: '', specs: [] }, [{ specFile, messages }]);
}

function addFault(builder: Builder, { specFile, messages }: Fault): void {
  const suite = builder.testSuite().name(oneLine(specFile));
  const one = suite.testCase().className(className(specFile)).name('can be run').file(oneLine(specFile));
  const [first, ...more] = messages;
  const others = more.length > 0 ? ` (and ${more.length} more)` : '';
  one.error(
    oneLine(first ?? 'the run could not be made') + others,
    'fault',
    messages.map(visible).join('\n'),
  );
}

function addSpec(builder: Builder, spec: SpecRun, version: string): void {
  const suite = builder.testSuite().name(oneLine(spec.loop)).time(milliseconds(spec.seconds));
  addProperties(suite, spec, version);
  const share = milliseconds(spec.seconds / Math.max(1, spec.requirements.length));
  for (const requirement of spec.requirements)
    addRequirement(suite.testCase().time(share), requirement, spec);
}

function addProperties(suite: TestSuite, spec: SpecRun, version: string): void {
  const { provenance } = spec;
  const properties: Record<string, string | undefined> = {
    'pawl version': version,
    spec: spec.file,
    image: provenance?.image,
    'kind of image': provenance?.kind,
    'names from': provenance?.symbols?.image,
    'image SHA-256': provenance?.sha256,
    'build id': provenance?.buildId,
    'build skipped': provenance?.buildSkipped ? 'yes' : undefined,
    warnings: warningsInWords(spec).join('; ') || undefined,
    compilers: provenance?.compilers.join('; ') || undefined,
    seed: String(spec.seed),
    plants: String(plantsTried(spec)),
    merge: mergeInWords(spec),
    caution,
  };
  for (const [name, value] of Object.entries(properties)) {
    if (value !== undefined) suite.property(name, oneLine(value));
  }
}

function addRequirement(one: TestCase, requirement: RequirementRun, spec: SpecRun): void {
  const { name, measure, place, verdict } = requirement;
  const isOutput = !blocksMerge(requirement);
  one
    .className(className(spec.build === undefined ? spec.file : `${spec.file}/${spec.build}`))
    .name(`${oneLine(name)} ${measureName(measure)}`)
    .file(oneLine(place.file))
    .property('line', String(place.line))
    .property('verdict', verdict.kind)
    .standardOutput(body(isOutput ? inFull(requirement, spec) : findingOnOneLine(requirement)));
  if (verdict.kind === 'broken' && requirement.waiver?.letsThrough) one.skipped();
  else if (verdict.kind === 'broken' || verdict.kind === 'slipped') {
    one.failure(findingOnOneLine(requirement), verdict.kind).stacktrace(body(inFull(requirement, spec)));
  }
  if (verdict.kind === 'unjudged') {
    one.error(findingOnOneLine(requirement), 'unjudged', body(inFull(requirement, spec)));
  }
}

/** CI servers take `[[ATTACHMENT|path]]` in a text as an order to fetch that file: no name may give it. */
function body(text: string): string {
  return text.replace(/\[(?=\[)/g, '[\u200b');
}

/** The finding in full: numbers, plants, the table of parameters, the claim, and how to run it again. */
function inFull(requirement: RequirementRun, spec: SpecRun): string {
  const { place, nominal, worst, limit, verdict } = requirement;
  const against = limitNumbers(limit);
  const lines = [
    `${visible(requirement.name)}: ${measureInWords(requirement)}`,
    `${oneLine(place.file)}:${place.line}:${place.column}`,
    requirement.reason ? `reason:   ${visible(requirement.reason)}` : '',
    `verdict:  ${verdict.kind}${verdict.kind === 'met' ? '' : `: ${visible(verdict.why)}`}`,
    `limit:    ${limitInWords(limit, requirement)}`,
    `nominal:  ${formatResult(nominal.result, requirement, against)}`,
    `worst:    ${formatResult(worst.result, requirement, against)}`,
    `headroom: ${formatHeadroom(worst.headroom)}`,
    `evidence: ${evidenceInWords(requirement)}`,
    titled('proof:    ', proofInWords(requirement)),
    titled('nearest:  ', shrunkInWords(requirement)),
    titled('reach:    ', reachInWords(requirement)),
    titled('matters:  ', effectsInWords(requirement)),
    ...sinceThen(requirement, spec),
    requirement.claim ? `claim:    ${visible(requirement.claim)}` : '',
    titled('to do:    ', whatToDo(requirement, spec)),
    `plant:    ${plantInWords(worst)}`,
    '',
    parameterTable(worst),
    '',
    `run again: ${runAgain(spec)}    (seed ${spec.seed}${hash(spec)})`,
  ];
  return lines.filter((line, at) => line !== '' || lines[at - 1] !== '').join('\n');
}

function titled(title: string, words: string | undefined): string {
  return words === undefined ? '' : title + visible(words);
}

function sinceThen(requirement: RequirementRun, spec: SpecRun): string[] {
  const words = [
    comparisonInWords(requirement),
    headroomChange(requirement),
    ...attributionInWords(requirement, spec),
  ];
  const waiver = waiverInWords(requirement);
  return [
    ...words.flatMap((text) => (text === undefined ? [] : [`latched:  ${text}`])),
    ...(waiver === undefined ? [] : [`waiver:   ${waiver}`]),
  ];
}

function hash({ provenance }: SpecRun): string {
  return provenance ? `, ${counted(provenance.bytes, 'byte')} of image, SHA-256 ${provenance.sha256}` : '';
}

/** The spec's path as readers of JUnit group by it: dots for slashes, without the ending. */
function className(file: string): string {
  return oneLine(file)
    .replace(/^(\.?\/)+/, '')
    .replace(/\.pawl\.ya?ml$/, '')
    .replaceAll(/[\\/]+/g, '.');
}

function milliseconds(seconds: number): number {
  return Math.round(seconds * 1000) / 1000;
}
