import type { CoefficientValues } from '../loop/parts.js';
import type { SpecPlots } from '../report/index.js';
import type { Spec } from '../spec/spec.js';
import type { JudgedSpec } from '../verdict/judge_spec.js';
import { widePlants } from './band_plants.js';
import type { Clock } from './fineness.js';
import { openLoopPlots } from './open_loop_plots.js';
import { headroomPlanes } from './planes.js';
import { tracePlots } from './trace_plots.js';

/**
 * What a report draws of a judged spec: each signal over time with the nominal plant, the worst and a band over some dozen
 * others (fewer where a run takes long), each opened loop over frequency, and the headroom over the two parameters that matter most.
 * @throws {LoopError} where the build's numbers do not fit the spec.
 */
export function plotsOf(
  spec: Spec,
  coefficients: CoefficientValues,
  judged: JudgedSpec,
  now: Clock = () => performance.now(),
): SpecPlots {
  return {
    traces: tracePlots(spec, coefficients, judged, widePlants(spec), now),
    loops: openLoopPlots(spec, coefficients, judged.requirements),
    planes: headroomPlanes(spec, coefficients, judged, now),
  };
}
