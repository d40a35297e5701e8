import type { Complex } from '../linear/complex.js';
import { NumericFailure } from '../linear/numeric_failure.js';
import { prepareResponse } from '../linear/response.js';
import type { LoopView } from '../measure/loop_view.js';
import type { FrequencyCurve, OpenLoopPlot } from '../report/index.js';
import type { RequirementRun } from '../verdict/run.js';
import { crossingsOf, frequenciesAbout } from './frequencies.js';
import { lookedAt } from './gain_fences.js';
import { liftedLoop, seenAtOneFrequency } from './lifted_loop.js';
import { type MarginsFound, marginBrackets, modulusBracket } from './margin_brackets.js';
import type { OpenedLoop } from './opened_loops.js';
import { valuesOfPlant } from './plant_values.js';

/** The open loops of the nominal plant, of the same with latched coefficients, and of the first requirement's worst plant. */
export interface Views {
  nominal: LoopView;
  latched: LoopView | undefined;
  worst: LoopView;
}

/** L of an opened loop over frequency; undefined where it cannot be formed for the nominal or the worst plant,
 * or is opened at several signals at once: L is a matrix then, and no curve. */
export function openLoopPlot(loop: OpenedLoop): OpenLoopPlot | undefined {
  if (loop.signals.length > 1) return undefined;
  const opened = { ...loop, runs: marginsFirst(loop.runs) };
  const [first] = opened.runs;
  const [nominal, worst] = [first.nominal, first.worst].map((plant) => opened.of(valuesOfPlant(plant)));
  if (nominal.kind !== 'loop' || worst.kind !== 'loop') return undefined;
  const views: Views = {
    nominal: nominal.loop,
    latched: opened.latched(valuesOfPlant(first.nominal)),
    worst: worst.loop,
  };
  return views.nominal.changes === 1 ? singlePlot(opened, views) : liftedPlot(opened, views);
}

/** What is read from L itself comes before what has a picture of its own: the worst plant that is drawn is the first one's. */
function marginsFirst(runs: OpenedLoop['runs']): OpenedLoop['runs'] {
  const isRead = (run: RequirementRun): boolean => !lookedAt(run) || run.measure === 'modulus_margin';
  return [...runs.filter(isRead), ...runs.filter((run) => !isRead(run))];
}

function singlePlot({ at, runs }: OpenedLoop, views: Views): OpenLoopPlot {
  const found = { nominal: marginsFound(views.nominal), worst: marginsFound(views.worst) };
  const mattering = [views.nominal, views.worst].flatMap(crossingsOf);
  const frequencies = frequenciesAbout(mattering, Math.PI / views.nominal.period);
  const [lowest, highest] = [frequencies[0], frequencies[frequencies.length - 1]];
  return {
    ...curvesOf(at, runs, views, frequencies, (view) => prepareResponse(view.equations)),
    margins: runs
      .flatMap((run) => marginBrackets(run, found))
      .filter(({ frequency }) => frequency >= lowest && frequency <= highest),
    modulus: runs.map((run) => modulusBracket(run, found)).find((one) => one !== undefined),
  };
}

function liftedPlot({ at, runs }: OpenedLoop, views: Views): OpenLoopPlot {
  const frequencies = frequenciesAbout([], Math.PI / views.nominal.period);
  return {
    ...curvesOf(at, runs, views, frequencies, seenAtOneFrequency),
    ...{ margins: [], modulus: undefined },
    lifted: liftedLoop(runs, views),
  };
}

type ResponseAt = (angularFrequency: number) => Complex;

function curvesOf(
  at: string,
  runs: OpenedLoop['runs'],
  { nominal, latched, worst }: Views,
  frequencies: readonly number[],
  responseOf: (view: LoopView) => ResponseAt,
): Pick<OpenLoopPlot, 'requirements' | 'at' | 'frequencies' | 'nominal' | 'latched' | 'worst'> {
  const curve = (view: LoopView): FrequencyCurve => curveOf(responseOf(view), frequencies);
  return {
    requirements: runs.map(({ name }) => name),
    ...{ at, frequencies, nominal: curve(nominal), worst: curve(worst) },
    ...(latched && { latched: curve(latched) }),
  };
}

function marginsFound(view: LoopView): MarginsFound {
  return { margins: view.margins(), response: prepareResponse(view.equations) };
}

/** Magnitude and phase, the phase without jumps and starting between −3π/2 and π/2. */
function curveOf(response: ResponseAt, frequencies: readonly number[]): FrequencyCurve {
  const magnitude: number[] = [];
  const phase: number[] = [];
  for (const frequency of frequencies) {
    const value = finiteResponse(response, frequency);
    magnitude.push(Math.hypot(value.real, value.imaginary));
    phase.push(unwrapped(Math.atan2(value.imaginary, value.real), phase.findLast(Number.isFinite)));
  }
  return { magnitude, phase };
}

/** Not-a-number at a pole on the boundary itself, where the curve is broken. */
function finiteResponse(response: ResponseAt, frequency: number): Complex {
  try {
    return response(frequency);
  } catch (error) {
    if (error instanceof NumericFailure) return { real: Number.NaN, imaginary: Number.NaN };
    throw error;
  }
}

function unwrapped(angle: number, before: number | undefined): number {
  if (before === undefined) return angle > Math.PI / 2 ? angle - 2 * Math.PI : angle;
  return angle + 2 * Math.PI * Math.round((before - angle) / (2 * Math.PI));
}
