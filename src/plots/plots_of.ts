import type { CoefficientValues } from '../loop/parts.js';
import type { OpenLoopPlot, SpecPlots } from '../report/index.js';
import { blockingFirst } from '../report/verdict_words.js';
import type { Spec } from '../spec/spec.js';
import type { JudgedSpec } from '../verdict/judge_spec.js';
import { widePlants } from './band_plants.js';
import type { Clock } from './fineness.js';
import { gainPlots } from './gain_plots.js';
import { type LatchedToDraw, numbersToDraw } from './numbers_to_draw.js';
import { openLoopPlot } from './open_loop_plots.js';
import { openedLoops } from './opened_loops.js';
import { headroomPlanes } from './planes.js';
import { tracePlots } from './trace_plots.js';
import { undrawnLoops } from './undrawn_loops.js';

/**
 * What a report draws of a judged spec: each signal over time with the nominal plant, the worst and a band over some dozen
 * others (fewer where a run takes long), each opened loop over frequency, its responses where they are limited, and the headroom
 * over the two parameters that matter most.
 * @param judged with its verdicts as the report shows them: a picture belongs to those that block first.
 * @param latched where the spec has a latched reference.
 * @throws {LoopError} where the build's numbers do not fit the spec.
 */
export function plotsOf(
  spec: Spec,
  coefficients: CoefficientValues,
  judged: JudgedSpec,
  latched: LatchedToDraw = { reference: undefined, since: undefined },
  now: Clock = () => performance.now(),
): SpecPlots {
  const numbers = numbersToDraw(coefficients, latched);
  const shown = inOrderShown(spec, judged);
  const wide = widePlants(spec);
  const opened = openedLoops(shown, numbers, judged.requirements);
  return {
    traces: tracePlots(shown, numbers, judged, wide, now),
    loops: opened.flatMap((loop): OpenLoopPlot[] => {
      const plot = openLoopPlot(loop);
      return plot ? [plot] : [];
    }),
    gains: opened.flatMap((loop) => gainPlots(loop, wide, now)),
    planes: headroomPlanes(spec, coefficients, judged, now),
    undrawn: opened.flatMap(undrawnLoops),
  };
}

/** The spec with its requirements in the order in which a report shows them. */
function inOrderShown(spec: Spec, judged: JudgedSpec): Spec {
  const names = blockingFirst(judged.requirements).map(({ name }) => name);
  const requirements = [...spec.requirements].sort((a, b) => names.indexOf(a.name) - names.indexOf(b.name));
  return { ...spec, requirements };
}
