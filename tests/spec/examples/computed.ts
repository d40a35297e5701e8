import { vocabulary } from '../../../src/cli/vocabulary.js';
import { TraceStore } from '../../../src/kernel/run_plant.js';
import { Linearisation } from '../../../src/linear/linearise.js';
import { pointOfRest } from '../../../src/linear/point_of_rest.js';
import { expandLoop } from '../../../src/loop/expand.js';
import type { CoefficientValues } from '../../../src/loop/parts.js';
import { scheduleOf } from '../../../src/loop/schedule.js';
import { valueAt } from '../../../src/measure/bernstein.js';
import { type Curve, pieceAt, pieceOf } from '../../../src/measure/curve.js';
import { PlantEvaluator } from '../../../src/measure/evaluate_plant.js';
import { ScenarioEvents } from '../../../src/measure/scenario_events.js';
import { ScenarioRun } from '../../../src/measure/scenario_run.js';
import { formatSpecError, loadSpec, type Spec } from '../../../src/spec/index.js';
import { parseUnit } from '../../../src/spec/units.js';
import { numberOf } from '../../small_loop.js';
import type { Example, Outcome, SignalOutcome } from './example.js';
import { isSignalOutcome, scenarioName, seconds, wholeSpec } from './whole_spec.js';

/** With so many halvings of its steps the error of a trace is below rounding. */
const usualHalvings = 4;

/** What pawl computes for each outcome of an example, in the unit of the outcome. @throws Error where it gives no number. */
export function computed(example: Omit<Example, 'of'>): number[] {
  const spec = specOf(example);
  const build: CoefficientValues = new Map(
    Object.entries(example.build ?? {}).map(([name, held]) => [name, held]),
  );
  const { outcomes, halvings = usualHalvings } = example;
  const curves = curvesOf(spec, build, outcomes.filter(isSignalOutcome), halvings);
  const nominal = Float64Array.from(spec.parameters, (parameter) => parameter.nominal);
  const results = outcomes.every(isSignalOutcome)
    ? []
    : new PlantEvaluator(spec, build, new Map(Object.entries(example.latched ?? {}))).evaluate(
        nominal,
        halvings,
      );
  const first = spec.requirements.length - outcomes.length;
  return outcomes.map((outcome, at) =>
    inUnit(
      isSignalOutcome(outcome)
        ? valueAfter(curves.get(outcome.signal)!, seconds(outcome.at))
        : numberOf(results[first + at]),
      outcome.unit,
    ),
  );
}

function specOf(example: Omit<Example, 'of'>): Spec {
  const files = example.files ?? {};
  const loaded = loadSpec(wholeSpec(example), 'example.pawl.yaml', vocabulary, {
    read: (path) => files[path],
  });
  if (loaded.kind === 'errors') throw new Error(loaded.errors.map(formatSpecError).join('\n'));
  return loaded.spec;
}

function curvesOf(
  spec: Spec,
  build: CoefficientValues,
  outcomes: readonly SignalOutcome[],
  halvings: number,
): Map<string, Curve> {
  const names = [...new Set(outcomes.map(({ signal }) => signal))];
  if (names.length === 0) return new Map();
  const scenario = spec.scenarios.find(({ name }) => name === scenarioName)!;
  const loop = expandLoop(spec, build, { scenario });
  const nominal = Float64Array.from(spec.parameters, (parameter) => parameter.nominal);
  const events = new ScenarioEvents(loop, scenario);
  const run = new ScenarioRun(loop, scenario, events, names, spec.perturbation.seed, new TraceStore());
  const fromRest = scenario.start === 'rest';
  const rest = fromRest ? pointOfRest(new Linearisation(loop), nominal, loop.inputRest) : undefined;
  if (rest?.kind === 'none') throw new Error(rest.why);
  const traced = run.run(nominal, rest?.point, scheduleOf(loop, nominal), halvings);
  return new Map(names.map((name) => [name, run.curve(traced, name)]));
}

function valueAfter(curve: Curve, time: number): number {
  const piece = pieceAt(curve, time);
  const { times } = curve;
  return valueAt(pieceOf(curve, piece), (time - times[piece]) / (times[piece + 1] - times[piece]));
}

function inUnit(value: number, unit: Outcome['unit']): number {
  if (unit === 'dB') return 20 * Math.log10(value);
  if (unit === '') return value;
  const parsed = parseUnit(unit);
  if (parsed.kind === 'fault') throw new Error(parsed.message);
  return value / parsed.unit.scale;
}
