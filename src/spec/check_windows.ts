import { suggestion } from './nearest.js';
import { nominalValue } from './nominal_value.js';
import type { Reading } from './reading.js';
import type { InputEvent, Requirement, Scenario } from './spec.js';

/** Reports step measures whose scenario has no step of `to`, or ends before the measure could be formed. */
export function checkWindows(requirements: Requirement[], scenarios: Scenario[], reading: Reading): void {
  for (const requirement of requirements) {
    const measure = reading.vocabulary.measures.find(({ name }) => name === requirement.measure)!;
    const scenario = scenarios.find(({ name }) => name === requirement.in);
    if (scenario === undefined || !measure.window?.startsWith('single_step')) continue;
    const window = stepWindow(requirement, scenario, reading);
    if (window !== undefined && measure.window === 'single_step_outlasting_limit') {
      checkLength(requirement, scenario, window, reading);
    }
  }
}

/** From the first change of `to` (s) to its next or the scenario's end. */
interface Window {
  from: number;
  until: number;
}

function stepWindow(requirement: Requirement, scenario: Scenario, reading: Reading): Window | undefined {
  const { to } = requirement.signals;
  if (to === undefined) return undefined;
  const { measure, in: name } = requirement;
  if (reading.names.entries.get(to)?.kind !== 'input') {
    const inputs = Object.keys(scenario.inputs);
    reading.problems.add(
      requirement.place,
      `\`${measure}\` needs a \`to:\` that makes a step, which only an input does; \`${to}\` is none${suggestion(to, inputs)}`,
    );
    return undefined;
  }
  const events = Object.hasOwn(scenario.inputs, to) ? scenario.inputs[to] : [];
  if (events.length === 0) {
    reading.problems.add(
      requirement.place,
      `\`${measure}\` needs a step of \`${to}\`, but scenario \`${name}\` does not change \`${to}\``,
    );
    return undefined;
  }
  const other = events.find(({ shape }) => !changesOnce(shape, reading));
  if (other !== undefined) {
    reading.problems.add(
      requirement.place,
      `\`${measure}\` needs a step of \`${to}\`, but scenario \`${name}\` gives it a ${other.shape}`,
    );
    return undefined;
  }
  return windowOf(events, scenario.lasts, reading);
}

/** A pulse too is a step, up to its end. */
function changesOnce(shape: string, reading: Reading): boolean {
  const description = reading.vocabulary.shapes.find(({ key }) => key === shape);
  return description === undefined || description.isStep;
}

function windowOf(events: InputEvent[], lasts: number, reading: Reading): Window | undefined {
  const times = events.flatMap((event) => {
    const at = nominalValue(event.at, reading.names);
    if (event.lasts === undefined) return [at];
    const length = nominalValue(event.lasts, reading.names);
    return [at, at === undefined || length === undefined ? undefined : at + length];
  });
  if (Number.isNaN(lasts) || times.some((time) => time === undefined)) return undefined;
  const [from, until = lasts] = (times as number[]).sort((a, b) => a - b);
  return { from, until };
}

function checkLength(requirement: Requirement, scenario: Scenario, window: Window, reading: Reading): void {
  const { limit } = requirement;
  const longest = 'at_most' in limit ? limit.at_most : 'between' in limit ? limit.between[1] : Number.NaN;
  const needed = 1.5 * longest;
  // One part in 1e9 is left to the rounding of sums such as 0.2 + 3.8.
  const long = !(window.until - window.from < needed * (1 - 1e-9));
  if (long || window.from >= scenario.lasts) return;
  const end =
    window.until === scenario.lasts ? `scenario \`${scenario.name}\` ends` : 'the next change comes';
  reading.problems.add(
    requirement.limitPlace,
    `${end} ${rounded(window.until - window.from)} s after the step, but a limit of ${rounded(longest)} s needs at least ${rounded(needed)} s: half as long again`,
  );
}

function rounded(seconds: number): number {
  return Number(seconds.toPrecision(6));
}
