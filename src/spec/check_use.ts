import { expressionsOf, needsOf } from './dependencies.js';
import type { NameKind } from './names.js';
import { isWhole, type Reading } from './reading.js';
import type { ControllerDefinition } from './spec.js';

const mustBeUsed: Partial<Record<NameKind, string>> = {
  coefficient: 'no controller or requirement uses it',
  parameter: 'nothing uses it',
  input: 'nothing uses it',
  sensor: 'no controller reads it',
  actuator: 'no plant equation uses it',
};

/**
 * Reports what is defined and then forgotten: a change of it would be judged by nothing. What an included file defines
 * is there for several specs, and need not be used by each.
 */
export function checkUse(file: string, reading: Reading): void {
  if (reading.names.incomplete) return;
  for (const { name, kind, place } of reading.names.entries.values()) {
    const fault = mustBeUsed[kind];
    if (fault === undefined || place.file !== file || reading.names.used.has(name)) continue;
    reading.problems.add(place, `the ${kind} \`${name}\` is defined, but ${fault}; use it or leave it out`);
  }
}

/** Reports controllers that see nothing from outside themselves. */
export function checkControllersHear(controllers: readonly ControllerDefinition[], reading: Reading): void {
  if (reading.names.incomplete) return;
  for (const controller of controllers) {
    const expressions = controller.signals.flatMap((signal) => {
      const { drives, bounds } = expressionsOf(signal);
      return [...drives, ...bounds];
    });
    const names = expressions.flatMap((expression) => needsOf(expression)).map((need) => need.name);
    const hears = names.some((name) => comesFromOutside(name, controller.name, reading));
    if (hears || !expressions.every(isWhole)) continue;
    reading.problems.add(
      controller.place,
      `controller \`${controller.name}\` never gets a signal: none of its signals depends on a sensor, an input or another controller`,
    );
  }
}

function comesFromOutside(name: string, controller: string, reading: Reading): boolean {
  const entry = reading.names.entries.get(name);
  if (entry?.kind === 'controller signal') return entry.controller !== controller;
  return entry?.kind === 'sensor' || entry?.kind === 'input';
}
