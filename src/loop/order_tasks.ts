import { expressionsOf, needsOf } from '../spec/dependencies.js';
import type { ControllerDefinition, Spec } from '../spec/spec.js';
import { LoopError } from './loop.js';

/**
 * The controllers in the order in which they compute at a common instant: who is read without delay comes first.
 * @throws {LoopError} where controllers without delay read each other in a circle.
 */
export function orderTasks(spec: Spec): ControllerDefinition[] {
  const owner = new Map(
    spec.controllers.flatMap((controller) => controller.signals.map(({ name }) => [name, controller])),
  );
  const ordered: ControllerDefinition[] = [];
  const open = new Set<ControllerDefinition>();
  const visit = (controller: ControllerDefinition): void => {
    if (ordered.includes(controller)) return;
    if (open.has(controller)) {
      throw new LoopError(
        `controller '${controller.name}' reads its own result of the same instant through other controllers; give one of them a delay, or read before(…)`,
        controller.place,
      );
    }
    open.add(controller);
    for (const name of namesReadAtOnce(controller)) {
      const source = owner.get(name);
      if (source && source !== controller && !source.delay) visit(source);
    }
    ordered.push(controller);
  };
  for (const controller of spec.controllers) visit(controller);
  return ordered;
}

function namesReadAtOnce(controller: ControllerDefinition): string[] {
  return controller.signals.flatMap((signal) => {
    const { drives, bounds } = expressionsOf(signal);
    return [...drives, ...bounds]
      .flatMap((expression) => needsOf(expression))
      .filter(({ atOnce }) => atOnce)
      .map(({ name }) => name);
  });
}
