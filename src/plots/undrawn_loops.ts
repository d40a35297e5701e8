import type { LoopViewResult } from '../measure/loop_point.js';
import type { Undrawn } from '../report/index.js';
import type { RequirementRun } from '../verdict/run.js';
import type { OpenedLoop } from './opened_loops.js';
import { valuesOfPlant } from './plant_values.js';

/** Why an opened loop, or a response of it, has no picture; nothing where it has all. */
export function undrawnLoops({ at, signals, runs, of }: OpenedLoop): Undrawn[] {
  const requirements = runs.map(({ name }) => name);
  if (signals.length > 1) {
    const why = `The loop opened at ${at} at once has no curve over frequency: it is a matrix, with an input and an output for each change of each signal. Its margins are read from eigenvalues and singular values.`;
    return [{ requirements, why }];
  }
  const [first] = runs;
  for (const [which, plant] of [
    ['nominal', first.nominal],
    [`worst plant of ${first.name}`, first.worst],
  ] as const) {
    const found = of(valuesOfPlant(plant));
    if (found.kind === 'loop') continue;
    const whose = which === 'nominal' ? 'the nominal plant' : `the ${which}`;
    return [{ requirements, why: `The loop opened at ${at} is not drawn, since on ${whose} ${found.why}.` }];
  }
  return runs.flatMap((run) => unstableResponse(run, of(valuesOfPlant(run.worst)), at));
}

/** An unstable closed loop has no steady response to a wave, so that its sensitivity is no curve. */
function unstableResponse({ name, measure }: RequirementRun, found: LoopViewResult, at: string): Undrawn[] {
  const isClosed = /sensitivity|following|complementary|modulus/.test(measure);
  if (!isClosed || found.kind !== 'loop' || found.loop.stable) return [];
  const why = `On the worst plant of ${name} the loop closed at ${at} is unstable, so that it has no response to draw over frequency.`;
  return [{ requirements: [name], why }];
}
