import { parse, stringify } from 'yaml';
import type { Example, Outcome, SignalOutcome } from './example.js';

type Tree = string | Tree[] | { [key: string]: Tree };

/** The name of the scenario in which the inputs do what an example says. */
export const scenarioName = 'as_stated';

const read = (text: string): Tree => (parse(text, { schema: 'failsafe' }) as Tree | null) ?? {};

/** Sections of two texts in one: mappings and lists together, and of two texts the second. */
function merged(one: Tree, other: Tree): Tree {
  if (Array.isArray(one) && Array.isArray(other)) return [...one, ...other];
  if (!isMapping(one) || !isMapping(other)) return other;
  const keys = [...new Set([...Object.keys(one), ...Object.keys(other)])];
  return Object.fromEntries(
    keys.map((key) => [
      key,
      key in one && key in other ? merged(one[key], other[key]) : (other[key] ?? one[key]),
    ]),
  );
}

const isMapping = (tree: Tree): tree is { [key: string]: Tree } =>
  typeof tree === 'object' && !Array.isArray(tree);

export const isSignalOutcome = (outcome: Outcome): outcome is SignalOutcome => 'signal' in outcome;

/** The text of a whole spec around an example: what it shows, what it hides, its events, and requirements. */
export function wholeSpec({
  shown,
  hidden = '',
  when,
  rests,
  start = 'rest',
  outcomes,
}: Omit<Example, 'of'>): string {
  const signals = outcomes.filter(isSignalOutcome);
  const events = Object.entries(when ?? {});
  const lasts = Math.max(1e-3, ...signals.map(({ at }) => seconds(at))) * 1.25;
  const scenario = `scenarios: { ${scenarioName}: { lasts: ${lasts} s, start: ${start}, inputs: { ${events
    .map(([input, event]) => `${input}: ${event}`)
    .join(', ')} } } }`;
  // A spec needs a requirement: one looks at each signal.
  const requirements = outcomes.map((outcome, at) =>
    isSignalOutcome(outcome)
      ? `{ name: signal ${at}, measure: largest_value, of: ${outcome.signal}, in: ${scenarioName}, at_most: 1 ${outcome.unit} }`
      : outcome.requirement,
  );
  return stringify(
    [
      'pawl: "1"\nloop: An example of the reference',
      shown,
      hidden,
      inputsAtRest(rests ?? {}),
      events.length > 0 || signals.length > 0 ? scenario : '',
      `requirements:\n${requirements.map((requirement) => `  - ${requirement}`).join('\n')}`,
    ]
      .map(read)
      .reduce(merged),
    { schema: 'failsafe', lineWidth: 0 },
  );
}

function inputsAtRest(rests: Record<string, string>): string {
  const inputs = Object.entries(rests).map(([input, rest]) => `${input}: { rest: ${rest} }`);
  return inputs.length > 0 ? `inputs: { ${inputs.join(', ')} }` : '';
}

const sizes: Record<string, number> = { us: 1e-6, ms: 1e-3, s: 1, min: 60, h: 3600 };

/** A time such as `40 ms` in s. @throws Error where it is none. */
export function seconds(time: string): number {
  const [, digits, unit] = /^([\d.]+) (us|ms|s|min|h)$/.exec(time) ?? [];
  if (digits === undefined) throw new Error(`\`${time}\` is no time such as 40 ms`);
  return Number(digits) * sizes[unit];
}
