import { Linearisation } from '../linear/linearise.js';
import { NumericFailure } from '../linear/numeric_failure.js';
import { pointOfRest } from '../linear/point_of_rest.js';
import { prepareResponse } from '../linear/response.js';
import { expandLoop } from '../loop/expand.js';
import type { CoefficientValues } from '../loop/parts.js';
import { scheduleOf } from '../loop/schedule.js';
import { measureNamed } from '../measure/index.js';
import { LoopPoint } from '../measure/loop_point.js';
import type { LoopView } from '../measure/loop_view.js';
import type { FrequencyCurve, OpenLoopPlot } from '../report/index.js';
import type { Requirement, Spec } from '../spec/spec.js';
import type { RequirementRun } from '../verdict/run.js';
import { type MarginsFound, marginBrackets, modulusBracket } from './margin_brackets.js';
import { valuesOfPlant } from './plant_values.js';

const points = 320;
/** The picture reaches so far below the lowest crossing that matters and above the highest: what margins are read from. */
const below = 30;
const above = 8;
/** A phase crossing at which the gain is so far from one, as a factor, tells nothing. */
const farthestFactor = 100;
/** Without a crossing it covers so much of the range up to half the sampling frequency. */
const coveredWithoutCrossing = 1e4;

/**
 * One plot for each point at which requirements open and linearise the loop. A loop whose signal changes several times in
 * a cycle of all controllers has no single curve and none is drawn; nor is a loop that cannot be formed.
 */
export function openLoopPlots(
  spec: Spec,
  coefficients: CoefficientValues,
  judged: readonly RequirementRun[],
): OpenLoopPlot[] {
  const closed = new Linearisation(expandLoop(spec, coefficients));
  const openedAt = (point: LoopPoint, plant: Float64Array): LoopView | undefined => {
    try {
      const rest = pointOfRest(closed, plant, closed.loop.inputRest);
      if (rest.kind === 'none') return undefined;
      const found = point.view(plant, rest.point, scheduleOf(closed.loop, plant));
      return found.kind === 'loop' && found.loop.changes === 1 ? found.loop : undefined;
    } catch (error) {
      if (error instanceof NumericFailure) return undefined;
      throw error;
    }
  };
  return groupsOf(spec).flatMap((group): OpenLoopPlot[] => {
    const runs = group.map(({ name }) => judged.find((run) => run.name === name)!);
    const point = new LoopPoint(spec, coefficients, group[0]);
    const nominal = openedAt(point, valuesOfPlant(runs[0].nominal));
    const worst = openedAt(point, valuesOfPlant(runs[0].worst));
    return nominal && worst ? [plotOf(group[0].signals.at, runs, nominal, worst)] : [];
  });
}

/** Requirements on the same opened loop, linearised at the same point. */
function groupsOf({ requirements }: Spec): Requirement[][] {
  const groups = new Map<string, Requirement[]>();
  for (const requirement of requirements) {
    if (measureNamed(requirement.measure).description.basis !== 'loop') continue;
    const around = requirement.around.map(({ name, value }) => [name, value]);
    const key = JSON.stringify([requirement.signals.at, around]);
    groups.set(key, [...(groups.get(key) ?? []), requirement]);
  }
  return [...groups.values()];
}

function plotOf(
  at: string,
  runs: readonly RequirementRun[],
  nominalView: LoopView,
  worstView: LoopView,
): OpenLoopPlot {
  const found = { nominal: marginsFound(nominalView), worst: marginsFound(worstView) };
  const frequencies = frequenciesOf(nominalView, Object.values(found));
  return {
    requirements: runs.map(({ name }) => name),
    at,
    frequencies,
    nominal: curveOf(found.nominal, frequencies),
    worst: curveOf(found.worst, frequencies),
    margins: runs
      .flatMap((run) => marginBrackets(run, found))
      .filter(
        ({ frequency }) => frequency >= frequencies[0] && frequency <= frequencies[frequencies.length - 1],
      ),
    modulus: runs.map((run) => modulusBracket(run, found)).find((one) => one !== undefined),
  };
}

function marginsFound(view: LoopView): MarginsFound {
  return { margins: view.margins(), response: prepareResponse(view.equations) };
}

/**
 * Evenly spread over the logarithm, up to half the sampling frequency at most, with every crossing that matters among them so
 * that no margin lies between two.
 */
function frequenciesOf({ period }: LoopView, found: readonly MarginsFound[]): number[] {
  const end = Math.PI / period;
  const crossings = found
    .flatMap(({ margins: { gainCrossings, phaseCrossings } }) => [
      ...gainCrossings,
      ...phaseCrossings.filter(({ factor }) => Math.max(factor, 1 / factor) < farthestFactor),
    ])
    .map(({ frequency }) => frequency)
    .filter((frequency) => frequency > end / 1e7 && frequency <= end);
  const highest = crossings.length > 0 ? Math.min(end, above * Math.max(...crossings)) : end;
  const lowest = Math.min(end / coveredWithoutCrossing, ...crossings.map((one) => one / below));
  const ratio = highest / lowest;
  const even = Array.from({ length: points }, (_, at) => lowest * ratio ** (at / (points - 1)));
  return [...new Set([...even.slice(0, -1), ...crossings, highest])].sort((a, b) => a - b);
}

/** Magnitude and phase, the phase without jumps and starting between −3π/2 and π/2. */
function curveOf({ response }: MarginsFound, frequencies: readonly number[]): FrequencyCurve {
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
function finiteResponse(
  response: MarginsFound['response'],
  frequency: number,
): { real: number; imaginary: number } {
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
