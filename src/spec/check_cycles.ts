import { cyclesOf, expressionsOf, needsOf } from './dependencies.js';
import type { Reading } from './reading.js';
import type { ControllerDefinition, Expression, SignalDefinition, Spec } from './spec.js';

/** Reports signals that depend on each other with nothing between that holds a value. */
export function checkCycles(
  { plant, controllers }: Pick<Spec, 'plant' | 'controllers'>,
  reading: Reading,
): void {
  const states = new Set(
    reading.vocabulary.blocks
      .filter((block) => block.outputIsState && block.rooms.includes('plant'))
      .map((block) => block.key),
  );
  report(
    new Map(plant.map((signal) => [signal.name, plantNeeds(signal, states)])),
    plant,
    'at the same time: nothing between them, such as an integral or a lag, holds a value',
    reading,
  );
  const signals = controllers.flatMap((controller) => controller.signals);
  report(
    new Map(
      controllers.flatMap((one) =>
        one.signals.map((signal) => [signal.name, controllerNeeds(signal, one, controllers)]),
      ),
    ),
    signals,
    'at the same sampling instant: let one of them use before(…), or give a controller a delay',
    reading,
  );
}

function plantNeeds(signal: SignalDefinition, states: ReadonlySet<string>): string[] {
  const { drives, bounds } = expressionsOf(signal);
  return atOnce(states.has(signal.block) ? bounds : [...drives, ...bounds]);
}

/** What another controller gives after a delay is not needed at the same instant. */
function controllerNeeds(
  signal: SignalDefinition,
  own: ControllerDefinition,
  all: ControllerDefinition[],
): string[] {
  const { drives, bounds } = expressionsOf(signal);
  const late = all
    .filter((controller) => controller !== own && isDelayed(controller))
    .flatMap((controller) => controller.signals.map(({ name }) => name));
  return atOnce([...drives, ...bounds]).filter((name) => !late.includes(name));
}

function isDelayed({ delay }: ControllerDefinition): boolean {
  return delay !== undefined && !(delay.kind === 'number' && delay.value === 0);
}

function atOnce(expressions: Expression[]): string[] {
  return expressions
    .flatMap((expression) => needsOf(expression))
    .filter((need) => need.atOnce)
    .map(({ name }) => name);
}

function report(
  graph: ReadonlyMap<string, readonly string[]>,
  signals: readonly SignalDefinition[],
  why: string,
  reading: Reading,
): void {
  const reported = new Set<string>();
  for (const cycle of cyclesOf(graph)) {
    // One line a knot of cycles is enough: undoing one may undo the others.
    if (cycle.some((name) => reported.has(name))) continue;
    for (const name of cycle) reported.add(name);
    const first = signals.find(({ name }) => name === cycle[0])!;
    const chain = [...cycle, cycle[0]].map((name) => `\`${name}\``).join(' ← ');
    reading.problems.add(first.place, `${chain}: each needs the next ${why}`);
  }
}
