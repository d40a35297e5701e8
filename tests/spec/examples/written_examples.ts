import type { Example, MeasureGroup, MeasureOutcome, Outcome } from './example.js';
import { valueOfFormula } from './formula.js';
import { isSignalOutcome, scenarioName } from './whole_spec.js';

const code = (text: string): string => `\`${text}\``;
const yaml = (text: string): string => `\`\`\`yaml\n${text}\n\`\`\``;

/** A number with four figures, and whole numbers in full. */
function figures(value: number): string {
  const rounded = Math.abs(value) >= 1e3 ? Math.round(value) : Number(value.toPrecision(4));
  return `${rounded}`;
}

/** What an outcome gives: the number with its unit, and how it is worked out. */
function given({ formula, where = {}, unit, why, within = 0 }: Outcome): { number: string; how: string } {
  const plain = figures(valueOfFormula(formula, where));
  const names = Object.entries(where).map(([name, text]) => `${name} = ${code(text)}`);
  const same = plain === formula.replaceAll('−', '-');
  const number = `${plain}${unit === '' ? '' : ` ${unit}`}`;
  return {
    number: within > worthTelling ? `${number} to ${Number((100 * within).toPrecision(2))} %` : number,
    how: [...(same ? [] : [code(formula)]), ...names, ...(why ? [why] : [])].join(', '),
  };
}

/** A tolerance that may change a figure shown is told beside it. */
export const worthTelling = 1e-4;

function inWords(outcome: Outcome): string {
  const { number, how } = given(outcome);
  return how === '' ? number : `${number}: ${how}`;
}

function said(outcome: Outcome): string {
  return isSignalOutcome(outcome)
    ? `at ${outcome.at} ${code(outcome.signal)} is ${inWords(outcome)}`
    : `${code(shortened(outcome.requirement))} gives ${inWords(outcome)}`;
}

/** A requirement without its name, which only tells it from others. */
function shortened(requirement: string): string {
  return requirement.replace(/\{ name: [^,]*, /, '{ ').replace(`in: ${scenarioName}, `, '');
}

/** What happens in an example, as the words before its outcomes. */
function circumstances({
  when,
  rests,
  start,
  build,
  latched,
}: Pick<Example, 'when' | 'rests' | 'start' | 'build' | 'latched'>): string {
  const events = Object.entries(when ?? {}).map(([input, event]) => code(`${input}: ${event}`));
  const places = Object.entries(rests ?? {}).map(([input, rest]) => `${code(input)} at ${rest}`);
  const held = Object.entries(build ?? {}).map(
    ([name, numbers]) => `${code(name)} held as ${listed(numbers)}`,
  );
  const accepted = Object.entries(latched ?? {}).map(
    ([name, numbers]) => `${code(name)} latched as ${listed(numbers)}`,
  );
  const with_ = [...events, ...places, ...held, ...accepted];
  return [
    ...(with_.length > 0 ? [`with ${with_.join(' and ')}`] : []),
    ...(start === 'zero' ? [`from power-up (${code('start: zero')})`] : []),
  ].join(', ');
}

function listed(numbers: number[] | { values: number[]; format: string }): string {
  return Array.isArray(numbers) ? numbers.join(', ') : `${numbers.values.join(', ')} in ${numbers.format}`;
}

/** An example as text of the page. */
export function exampleText(example: Example): string {
  const title = example.shows ? `Example, ${example.shows}:` : 'Example:';
  return [title, yaml(example.shown), resultsText(example)].join('\n\n');
}

/** An example of several things together, with a heading and an introduction of its own. */
export function patternText(example: Example): string {
  const files = Object.entries(example.files ?? {}).map(
    ([path, text]) => `${code(path)}:\n\n\`\`\`${path.endsWith('.yaml') ? 'yaml' : 'text'}\n${text}\n\`\`\``,
  );
  const here = files.length > 0 ? ['The spec:'] : [];
  return [
    `### ${example.shows}`,
    example.intro,
    ...files,
    ...here,
    yaml(example.shown),
    resultsText(example),
  ].join('\n\n');
}

function resultsText(example: Example): string {
  const { outcomes } = example;
  const before = circumstances(example);
  return outcomes.length === 1
    ? sentence(`${before === '' ? '' : `${before}, `}${said(outcomes[0])}.`)
    : `${sentence(before === '' ? 'it gives' : before)}:\n\n${outcomes.map((outcome) => `- ${said(outcome)}`).join('\n')}`;
}

const sentence = (text: string): string => {
  const at = text.search(/[a-z]/i);
  return text.startsWith('`') ? text : text.slice(0, at) + text[at].toUpperCase() + text.slice(at + 1);
};

/** An example of a shape of inputs, as bullets below it. */
export function shapeExampleText({ when, outcomes }: Example): string {
  const [[input, event]] = Object.entries(when!);
  const results = outcomes.map((outcome) => {
    const { number, how } = given(outcome);
    const where = isSignalOutcome(outcome)
      ? `at ${outcome.at}`
      : `by ${code(shortened(outcome.requirement))}`;
    return `${number} ${where}${how === '' ? '' : ` (${how})`}`;
  });
  return `  - Example: with ${code(`${input}: ${event}`)} ${code(input)} is ${results.join(', ')}`;
}

/** Examples of measures that share a loop: the loop, and a row for each requirement. */
export function measureGroupText(group: MeasureGroup): string {
  const before = circumstances(group);
  const rows = group.outcomes.map(
    (outcome) =>
      `| ${[code(shortened(outcome.requirement)), ...resultCells(outcome)].map(cell).join(' | ')} |`,
  );
  return [
    `#### Example: ${group.title}`,
    `${sentence(group.shows)}${before === '' ? '' : `, ${before}`}:`,
    yaml(group.shown),
    ['| requirement | gives | by hand |', '|---|---|---|', ...rows].join('\n'),
  ].join('\n\n');
}

function resultCells(outcome: MeasureOutcome): string[] {
  const { number, how } = given(outcome);
  return [number, how];
}

const cell = (text: string): string => text.replaceAll('|', '\\|');
