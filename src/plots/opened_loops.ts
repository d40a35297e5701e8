import { Linearisation } from '../linear/linearise.js';
import { NumericFailure } from '../linear/numeric_failure.js';
import { pointOfRest } from '../linear/point_of_rest.js';
import { expandLoop } from '../loop/expand.js';
import type { CoefficientValues } from '../loop/parts.js';
import { scheduleOf } from '../loop/schedule.js';
import { measureNamed } from '../measure/index.js';
import { LoopPoint, type LoopViewResult } from '../measure/loop_point.js';
import type { LoopView } from '../measure/loop_view.js';
import { openedAt } from '../spec/opened_at.js';
import type { Requirement, Spec } from '../spec/spec.js';
import type { RequirementRun } from '../verdict/run.js';
import { type NumbersToDraw, whereItFits } from './numbers_to_draw.js';

/** A loop opened where requirements ask for it, linearised at one point, for plant after plant. */
export interface OpenedLoop {
  /** The signals at which it is opened, mostly one. */
  signals: readonly string[];
  /** The same in words. */
  at: string;
  /** At least one, in the order in which they are shown. */
  requirements: Requirement[];
  runs: RequirementRun[];
  /** With today's coefficients, or why it cannot be formed. */
  of: (plant: Float64Array) => LoopViewResult;
  /** With the latched ones; undefined where there are none to draw, or it cannot be formed with them. */
  latched: (plant: Float64Array) => LoopView | undefined;
}

/**
 * One for each point at which requirements open and linearise the loop.
 * @throws {LoopError} where today's numbers do not fit the spec.
 */
export function openedLoops(
  spec: Spec,
  { today, latched }: NumbersToDraw,
  judged: readonly RequirementRun[],
): OpenedLoop[] {
  return groupsOf(spec).map((requirements) => {
    const [first] = requirements;
    const of = opener(spec, today, first);
    const then = latched && whereItFits(() => opener(spec, latched, first));
    return {
      signals: openedAt(first),
      at: openedAt(first).join(' and '),
      requirements,
      runs: requirements.map(({ name }) => judged.find((run) => run.name === name)!),
      of,
      latched: (plant) => {
        const found = then?.(plant);
        return found?.kind === 'loop' ? found.loop : undefined;
      },
    };
  });
}

/** Requirements on the same opened loop, linearised at the same point. */
function groupsOf({ requirements }: Spec): Requirement[][] {
  const groups = new Map<string, Requirement[]>();
  for (const requirement of requirements) {
    if (measureNamed(requirement.measure).description.basis !== 'loop') continue;
    const around = requirement.around.map(({ name, value }) => [name, value]);
    const key = JSON.stringify([openedAt(requirement), around]);
    groups.set(key, [...(groups.get(key) ?? []), requirement]);
  }
  return [...groups.values()];
}

type Opener = (plant: Float64Array) => LoopViewResult;

function opener(spec: Spec, coefficients: CoefficientValues, requirement: Requirement): Opener {
  const closed = new Linearisation(expandLoop(spec, coefficients));
  const point = new LoopPoint(spec, coefficients, requirement);
  return (plant) => {
    try {
      const rest = pointOfRest(closed, plant, closed.loop.inputRest);
      if (rest.kind === 'none') return { kind: 'unformed', why: rest.why };
      return point.view(plant, rest.point, scheduleOf(closed.loop, plant));
    } catch (error) {
      if (error instanceof NumericFailure) return { kind: 'unformed', why: error.message };
      throw error;
    }
  };
}
