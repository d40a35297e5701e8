import type { Expression, Setting, SignalDefinition } from './spec.js';

/** A name that an expression needs, and whether it needs it at the same instant. */
export interface Need {
  name: string;
  atOnce: boolean;
}

/** The names in an expression; those inside before(…) are not needed at once. */
export function needsOf(expression: Expression, atOnce = true): Need[] {
  switch (expression.kind) {
    case 'number':
      return [];
    case 'name':
      return [{ name: expression.name, atOnce }];
    case 'negate':
      return needsOf(expression.of, atOnce);
    case 'before':
      return needsOf(expression.of, false);
    case 'operation':
      return [...needsOf(expression.left, atOnce), ...needsOf(expression.right, atOnce)];
    case 'call':
      return expression.arguments.flatMap((argument) => needsOf(argument, atOnce));
  }
}

/** The expressions in a setting; what is needed later only counts as standing in before(…). */
function expressionsIn(setting: Setting): Expression[] {
  const all = allExpressions(setting);
  return 'late' in setting && setting.late ? all.map(before) : all;
}

function allExpressions(setting: Setting): Expression[] {
  switch (setting.kind) {
    case 'expression':
      return [setting.expression];
    case 'rows':
      return setting.rows.flat();
    case 'names': {
      const { names, place } = setting;
      return names.map((name) => ({ kind: 'name', role: 'signal', name, index: undefined, place }));
    }
    default:
      return [];
  }
}

function before(of: Expression): Expression {
  return { kind: 'before', of, place: of.place };
}

/** The expressions of a signal: what drives its block, and the bounds that act on its output. */
export function expressionsOf(signal: SignalDefinition): { drives: Expression[]; bounds: Expression[] } {
  const settings = Object.values(signal.settings).flatMap(expressionsIn);
  const given = (list: (Expression | undefined)[]) => list.filter((one) => one !== undefined);
  return {
    drives: [...settings, ...given([signal.of, signal.gain])],
    bounds: given([signal.range?.low, signal.range?.high, signal.slew]),
  };
}

/**
 * The cycles met on one walk through a graph, each as the names along it: none where the graph has an order, but not every
 * one of a knot. Depth first without recursion; each name is entered once.
 */
export function cyclesOf(graph: ReadonlyMap<string, readonly string[]>): string[][] {
  const done = new Set<string>();
  const cycles: string[][] = [];
  for (const start of graph.keys()) {
    if (!done.has(start)) walk(start, graph, done, cycles);
  }
  return cycles;
}

function walk(
  start: string,
  graph: ReadonlyMap<string, readonly string[]>,
  done: Set<string>,
  cycles: string[][],
): void {
  const path = [{ name: start, next: 0 }];
  const depths = new Map([[start, 0]]);
  for (let top = path.at(-1); top !== undefined; top = path.at(-1)) {
    const follower = graph.get(top.name)?.[top.next];
    top.next += 1;
    if (follower === undefined) {
      done.add(top.name);
      depths.delete(top.name);
      path.pop();
      continue;
    }
    const met = depths.get(follower);
    if (met !== undefined) {
      cycles.push(path.slice(met).map(({ name }) => name));
    } else if (!done.has(follower) && graph.has(follower)) {
      depths.set(follower, path.length);
      path.push({ name: follower, next: 0 });
    }
  }
}
