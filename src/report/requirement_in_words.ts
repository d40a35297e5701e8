import type { Limit } from '../spec/spec.js';
import type { RequirementRun, SpecRun } from '../verdict/run.js';
import {
  counted,
  formatCount,
  formatHeadroom,
  formatLimit,
  formatNumber,
  formatResult,
  formatShare,
  limitNumber,
  unitText,
  type WrittenUnit,
} from './format_value.js';
import { oneLine, shortened } from './plain_text.js';
import { plantInWords } from './plant_in_words.js';
import { statementInWords } from './statement_in_words.js';

/** The numbers of a limit, SI. */
export function limitNumbers(limit: Limit): number[] {
  if ('at_most' in limit) return [limit.at_most];
  if ('at_least' in limit) return [limit.at_least];
  return [...limit.between];
}

/** A limit in the unit it was written in: "at most 25 %", "between 1.2 and 1.5 s". */
export function limitInWords(limit: Limit, written: WrittenUnit): string {
  if ('at_most' in limit) return `at most ${formatLimit(limit.at_most, written)}`;
  if ('at_least' in limit) return `at least ${formatLimit(limit.at_least, written)}`;
  const [low, high] = limit.between.map((end) => limitNumber(end, written));
  return `between ${low} and ${high} ${unitText(written)}`.trimEnd();
}

/** The measure's name as people write it: "settling time". */
export function measureName(measure: string): string {
  return oneLine(measure).replaceAll('_', ' ');
}

/**
 * The measure with its signals and scenario: "overshoot of angle to target in slew", "phase margin at duty and valve"; with what
 * it says, where it is a statement over time.
 */
export function measureInWords(
  requirement: Pick<RequirementRun, 'measure' | 'signals' | 'atSeveral' | 'scenario' | 'statement'>,
): string {
  const { measure, scenario, statement } = requirement;
  const parts = signalsInWords(requirement).map(([key, signal]) => ` ${oneLine(key)} ${signal}`);
  const where = scenario === undefined ? '' : ` in ${oneLine(scenario)}`;
  return (
    measureName(measure) + parts.join('') + where + (statement ? `: ${statementInWords(statement)}` : '')
  );
}

/** So much of a statement stands in a row of a table, in characters. */
const statementInRow = 48;

/** The measure with what it is taken from: "overshoot of angle"; of a statement over time what it says, shortened. */
export function measureWithSignal(
  requirement: Pick<RequirementRun, 'measure' | 'signals' | 'atSeveral' | 'statement'>,
): string {
  if (requirement.statement) return shortened(statementInWords(requirement.statement), statementInRow);
  const words = new Map(signalsInWords(requirement));
  const key = ['of', 'at'].find((one) => words.has(one));
  const name = measureName(requirement.measure);
  return key === undefined ? name : `${name} ${key} ${words.get(key)}`;
}

function signalsInWords({
  signals,
  atSeveral,
}: Pick<RequirementRun, 'signals' | 'atSeveral'>): [string, string][] {
  const single = Object.entries(signals).map(([key, signal]): [string, string] => [key, oneLine(signal)]);
  if (atSeveral === undefined) return single;
  const names = atSeveral.map((name) => oneLine(name));
  return [...single, ['at', `${names.slice(0, -1).join(', ')} and ${names.at(-1)}`]];
}

/** For which plants it must hold, where that is not every one: "for 99 % of plants", "at nominal". */
export function holdsForInWords({ holdsFor }: Pick<RequirementRun, 'holdsFor'>): string {
  if (holdsFor === 'nominal') return 'at the nominal plant';
  return holdsFor === 'all' ? 'for all plants' : `for ${formatNumber(holdsFor * 100)} % of plants`;
}

/** What stands behind the verdict: "nominal only", "tried 1,108 plants: broken on 12 (1.08 %), no number on 3". */
export function evidenceInWords({ evidence, counts }: Pick<RequirementRun, 'evidence' | 'counts'>): string {
  if (evidence.kind === 'nominal_only') return 'nominal only';
  const { tried, broken, unjudged } = counts;
  const found = broken > 0 ? [`broken on ${formatCount(broken)} (${formatShare(broken / tried)})`] : [];
  if (unjudged > 0) found.push(`no number on ${formatCount(unjudged)}`);
  const proved = evidence.kind === 'proved' ? 'proved for all plants within the bounds; ' : '';
  return `${proved}tried ${counted(evidence.plants, 'plant')}${found.length > 0 ? `: ${found.join(', ')}` : ''}`;
}

/**
 * The finding on one line: "AZ-1 is broken: overshoot of angle to target in slew: 31.4 %; limit at most 25 %; headroom
 * -25.6 %; plant: friction at its lower bound (10 N*m*s/rad); nothing else moved".
 */
export function findingOnOneLine(requirement: RequirementRun): string {
  const { name, verdict, worst, limit } = requirement;
  const measured = formatResult(worst.result, requirement, limitNumbers(limit));
  const parts = [`${oneLine(name)} is ${verdict.kind}: ${measureInWords(requirement)}: ${measured}`];
  const said = worst.result.kind === 'unformed' ? worst.result.why : undefined;
  const needsWhy = verdict.kind === 'unjudged' || verdict.kind === 'slipped';
  if (needsWhy && verdict.why !== said) parts.push(oneLine(verdict.why));
  parts.push(
    `limit ${limitInWords(limit, requirement)}`,
    `headroom ${formatHeadroom(worst.headroom)}`,
    `plant: ${plantInWords(worst)}`,
  );
  return parts.join('; ');
}

/** Claims of a spec, each once, with the requirements that it is made for: "AZ-1, AZ-2: in 1,000 …". */
export function claimsInWords(spec: Pick<SpecRun, 'requirements'>): { names: string[]; claim: string }[] {
  const byClaim = new Map<string, string[]>();
  for (const { name, claim } of spec.requirements) {
    if (claim === undefined) continue;
    byClaim.set(claim, [...(byClaim.get(claim) ?? []), oneLine(name)]);
  }
  return [...byClaim].map(([claim, names]) => ({ names, claim }));
}
