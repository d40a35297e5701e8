import { TraceStore } from '../../src/kernel/run_plant.js';
import { Linearisation } from '../../src/linear/linearise.js';
import { type PointOfRest, pointOfRest } from '../../src/linear/point_of_rest.js';
import { expandLoop } from '../../src/loop/expand.js';
import type { Loop } from '../../src/loop/loop.js';
import { scheduleOf } from '../../src/loop/schedule.js';
import { type Curve, pointsOfPiece } from '../../src/measure/curve.js';
import { ScenarioEvents } from '../../src/measure/scenario_events.js';
import { ScenarioRun } from '../../src/measure/scenario_run.js';
import { specOf } from './spec_of.js';

/** A signal of the nominal plant at both ends of each piece of its trace, in the order of time; SI. */
export interface TracePoint {
  time: number;
  value: number;
  /** Of its change, a second. */
  rate: number;
}

/**
 * The traces of named signals in the scenario `run` of a spec, by name.
 * @throws Error where the run does not come to its end.
 */
export function traceOf(
  sections: string,
  names: readonly string[],
  halvings = 0,
): Record<string, TracePoint[]> {
  const asked = `{ name: any, measure: reversals_per_second, of: ${names[0]}, in: run, at_least: 0 1/s }`;
  const spec = specOf(`${sections}\nrequirements: [${asked}]`);
  const [scenario] = spec.scenarios;
  const parameters = Float64Array.from(spec.parameters, ({ nominal }) => nominal);
  const loop = expandLoop(spec, new Map(), { scenario });
  const point = scenario.start === 'rest' ? restOf(loop, parameters) : undefined;
  const runner = new ScenarioRun(
    loop,
    scenario,
    new ScenarioEvents(loop, scenario),
    names,
    1,
    new TraceStore(),
  );
  const run = runner.run(parameters, point, scheduleOf(loop, parameters), halvings);
  if (run.end.kind !== 'complete') throw new Error(`${run.end.kind} at ${run.end.time} s`);
  return Object.fromEntries(names.map((name) => [name, pointsOf(runner.curve(run, name))]));
}

function pointsOf({ times, points, pieces }: Curve): TracePoint[] {
  return Array.from({ length: 2 * pieces }, (_, i) => {
    const piece = i >> 1;
    const [length, first] = [times[piece + 1] - times[piece], pointsOfPiece * piece];
    const rate = (a: number): number => ((pointsOfPiece - 1) * (points[a + 1] - points[a])) / length;
    const last = first + pointsOfPiece - 1;
    return i % 2 === 0
      ? { time: times[piece], value: points[first], rate: rate(first) }
      : { time: times[piece + 1], value: points[last], rate: rate(last - 1) };
  });
}

function restOf(loop: Loop, parameters: Float64Array): PointOfRest {
  const rest = pointOfRest(new Linearisation(loop), parameters, loop.inputRest);
  if (rest.kind === 'none') throw new Error(rest.why);
  return rest.point;
}
