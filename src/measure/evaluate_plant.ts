import { TraceStore } from '../kernel/run_plant.js';
import type { Run } from '../kernel/trace.js';
import { Linearisation } from '../linear/linearise.js';
import { NumericFailure } from '../linear/numeric_failure.js';
import { pointOfRest, type RestResult } from '../linear/point_of_rest.js';
import { Evaluation } from '../loop/evaluate.js';
import { expandLoop } from '../loop/expand.js';
import { type Loop, LoopError } from '../loop/loop.js';
import type { CoefficientValues } from '../loop/parts.js';
import { type Schedule, scheduleOf } from '../loop/schedule.js';
import type { Requirement, Spec } from '../spec/spec.js';
import { signalsOfStatement } from '../spec/statement.js';
import { type Curve, isConstant } from './curve.js';
import { firmwareResults } from './firmware_results.js';
import { measureNamed } from './index.js';
import { LoopPoint, type LoopViewResult, openingsOf } from './loop_point.js';
import {
  isLoopMeasure,
  isTraceMeasure,
  type LatchedNumbers,
  type LoopMeasure,
  type MeasureResult,
  type TraceContext,
  type TraceMeasure,
  unformed,
  type Window,
} from './measure.js';
import { ScenarioEvents } from './scenario_events.js';
import { ScenarioRun, timingIsCommon } from './scenario_run.js';

interface TraceGroup {
  run: ScenarioRun;
  /** Where the scenario has states of its own: for the point of rest with them. */
  ownStates: Linearisation | undefined;
  events: ScenarioEvents;
  requirements: { requirement: Requirement; index: number; measure: TraceMeasure }[];
}

interface LoopGroup {
  point: LoopPoint;
  requirements: { requirement: Requirement; index: number }[];
}

/** One plant to measure, with what all its scenarios have in common. */
interface PlantCase {
  /** SI, in the order of the spec. */
  parameters: Float64Array;
  rest: RestResult;
  schedule: Schedule;
  halvings: number;
}

/** Measures every requirement of a spec for one plant after another. */
export class PlantEvaluator {
  readonly loop: Loop;
  private readonly linearisation: Linearisation;
  private readonly traceGroups: TraceGroup[];
  private readonly loopGroups: LoopGroup[];
  private readonly commonSchedule: Schedule | undefined;
  private readonly firmwareResults: Map<number, MeasureResult>;

  /**
   * @param latched what coefficients are compared with, where a requirement asks for their change.
   * @throws {LoopError} where the build's numbers do not fit the spec.
   */
  constructor(
    private readonly spec: Spec,
    coefficients: CoefficientValues,
    latched?: LatchedNumbers,
  ) {
    this.firmwareResults = firmwareResults(spec, coefficients, latched);
    this.loop = expandLoop(spec, coefficients);
    this.linearisation = new Linearisation(this.loop);
    const nominal = Float64Array.from(spec.parameters, (parameter) => parameter.nominal);
    const schedule = scheduleOf(this.loop, nominal);
    this.commonSchedule = timingIsCommon(this.loop) ? schedule : undefined;
    this.traceGroups = this.groupByScenario(coefficients);
    this.loopGroups = this.groupByLoopPoint(coefficients);
  }

  /**
   * @param parameters SI, in the order of the spec.
   * @param halvings how often the steps of the integration and of the traces are halved.
   * @returns one result for each requirement, in the order of the spec.
   */
  evaluate(parameters: Float64Array, halvings: number): MeasureResult[] {
    const results = this.spec.requirements.map(
      (_, index) => this.firmwareResults.get(index) ?? unformed('it was not measured'),
    );
    const plant = this.plantCase(parameters, halvings);
    if (typeof plant === 'string')
      return results.map((_, i) => this.firmwareResults.get(i) ?? unformed(plant));
    for (const group of this.traceGroups) this.traceResults(group, plant, results);
    for (const group of this.loopGroups) this.loopResults(group, plant, results);
    return results;
  }

  private groupByScenario(coefficients: CoefficientValues): TraceGroup[] {
    const store = new TraceStore();
    return this.spec.scenarios.flatMap((scenario, scenarioIndex) => {
      const requirements = this.spec.requirements.flatMap((requirement, index) => {
        const measure = measureNamed(requirement.measure);
        return 'in' in requirement && requirement.in === scenario.name && isTraceMeasure(measure)
          ? [{ requirement, index, measure }]
          : [];
      });
      if (requirements.length === 0) return [];
      const traced = [...new Set(requirements.flatMap(({ requirement }) => followedBy(requirement)))];
      const loop = expandLoop(this.spec, coefficients, { scenario });
      const events = new ScenarioEvents(loop, scenario);
      const seed = this.spec.perturbation.seed + scenarioIndex;
      const run = new ScenarioRun(loop, scenario, events, traced, seed, store);
      const ownStates = loop.states.length > this.loop.states.length ? new Linearisation(loop) : undefined;
      return [{ run, ownStates, events, requirements }];
    });
  }

  private groupByLoopPoint(coefficients: CoefficientValues): LoopGroup[] {
    const groups = new Map<string, LoopGroup>();
    this.spec.requirements.forEach((requirement, index) => {
      if (measureNamed(requirement.measure).description.basis !== 'loop') return;
      const around = requirement.around.map(({ name, value }) => [name, value]);
      const key = JSON.stringify([openingsOf(this.spec, requirement), requirement.signals.of, around]);
      let group = groups.get(key);
      if (!group) {
        group = { point: new LoopPoint(this.spec, coefficients, requirement), requirements: [] };
        groups.set(key, group);
      }
      group.requirements.push({ requirement, index });
    });
    return [...groups.values()];
  }

  /**
   * For each requirement whether every signal that it follows stays as it is over its whole scenario, in this plant: then it
   * guards nothing. Requirements of the loop and of the build follow none.
   */
  staysStill(parameters: Float64Array): boolean[] {
    const still = this.spec.requirements.map(() => false);
    const plant = this.plantCase(parameters, 0);
    if (typeof plant === 'string') return still;
    for (const group of this.traceGroups) {
      const traces = tracesOf(group, plant);
      if (typeof traces === 'string') continue;
      for (const { requirement, index } of group.requirements) {
        still[index] = followedBy(requirement).every((name) => isConstant(traces.curve(name)));
      }
    }
    return still;
  }

  /** The plant, or why its controllers cannot be timed: a fault of this plant alone, since the nominal one can. */
  private plantCase(parameters: Float64Array, halvings: number): PlantCase | string {
    const schedule = this.commonSchedule ?? this.scheduleOrFault(parameters);
    if (typeof schedule === 'string') return schedule;
    const rest = pointOfRest(this.linearisation, parameters, this.loop.inputRest);
    return { parameters, rest, schedule, halvings };
  }

  private scheduleOrFault(parameters: Float64Array): Schedule | string {
    try {
      return scheduleOf(this.loop, parameters);
    } catch (error) {
      if (error instanceof LoopError) return error.message;
      throw error;
    }
  }

  private traceResults(group: TraceGroup, plant: PlantCase, results: MeasureResult[]): void {
    const traces = tracesOf(group, plant);
    for (const { requirement, index, measure } of group.requirements) {
      if (typeof traces === 'string') {
        results[index] = unformed(traces);
        continue;
      }
      const context = this.traceContext(group, requirement, plant, traces.curve);
      results[index] =
        endedEarly(traces.run) ??
        windowFault(context.window, group.run.scenario.lasts) ??
        measure.measure(context);
    }
  }

  private traceContext(
    { run, events }: TraceGroup,
    { signals, quantities, bounds, statement }: Requirement,
    { parameters, schedule }: PlantCase,
    curve: (name: string) => Curve,
  ): TraceContext {
    const { of, to } = signals;
    const firstEvent = events.firstEvent(parameters);
    return {
      get of() {
        return curve(of);
      },
      to: to === undefined ? undefined : curve(to),
      step: to === undefined ? undefined : events.stepOf(to, parameters),
      range: this.rangeOf(of, parameters),
      period: this.periodOf(of, schedule),
      firstEvent,
      window: { from: quantities.from ?? firstEvent, until: quantities.until ?? run.scenario.lasts },
      quantity: (name) => quantities[name],
      bounds: bounds ?? {},
      statement,
      signal: curve,
      parameter: (name) => parameters[this.loop.parameters.indexOf(name)],
    };
  }

  /** Time between the changes of a sampled or held signal, s. */
  private periodOf(name: string, { period, ticksPerSecond }: Schedule): number | undefined {
    const { held, channels, signals } = this.loop;
    const signal = signals.get(name);
    if (!signal) return undefined;
    if (signal.kind === 'sampled') return period[signal.task] / ticksPerSecond;
    const { value } = signal;
    if (value.kind !== 'leaf' || value.leaf !== 'held') return undefined;
    return period[channels[held[value.index].channel].task] / ticksPerSecond;
  }

  private rangeOf(name: string, parameters: Float64Array): TraceContext['range'] {
    const range = this.loop.signals.get(name)?.range;
    if (!range) return undefined;
    const evaluation = new Evaluation({ parameter: parameters });
    return {
      low: evaluation.of(range.low),
      high: evaluation.of(range.high),
      resolution: evaluation.of(range.resolution),
    };
  }

  private loopResults(
    { point, requirements }: LoopGroup,
    { parameters, rest, schedule }: PlantCase,
    results: MeasureResult[],
  ): void {
    const found: LoopViewResult | string =
      rest.kind === 'none' ? rest.why : numeric(() => point.view(parameters, rest.point, schedule));
    for (const { requirement, index } of requirements) {
      const measure = measureNamed(requirement.measure);
      if (!isLoopMeasure(measure)) continue;
      results[index] = loopResult(measure, found, requirement);
    }
  }
}

/** The run of a scenario and the curves of its signals, or why there is none. */
function tracesOf(
  { run: scenario, ownStates }: TraceGroup,
  { parameters, rest: common, schedule, halvings }: PlantCase,
): { run: Run; curve: (name: string) => Curve } | string {
  const rest = ownStates ? pointOfRest(ownStates, parameters, ownStates.loop.inputRest) : common;
  const fromRest = scenario.scenario.start === 'rest';
  const given = scenario.scenario.startAt.length > 0;
  if (fromRest && !given && rest.kind === 'none') return rest.why;
  const point = fromRest && rest.kind === 'rest' ? rest.point : undefined;
  const run = numeric(() => scenario.run(parameters, point, schedule, halvings));
  if (typeof run === 'string') return run;
  const curves = new Map<string, Curve>();
  const curve = (name: string): Curve => {
    const found = curves.get(name) ?? scenario.curve(run, name);
    curves.set(name, found);
    return found;
  };
  return { run, curve };
}

function loopResult(
  { measure }: LoopMeasure,
  found: LoopViewResult | string,
  { quantities }: Requirement,
): MeasureResult {
  if (typeof found === 'string') return unformed(found);
  if (found.kind === 'unformed') return unformed(found.why);
  const result = numeric(() => measure({ loop: found.loop, quantity: (name) => quantities[name] }));
  return typeof result === 'string' ? unformed(result) : result;
}

function windowFault({ from, until }: Window, lasts: number): MeasureResult | undefined {
  if (until > lasts)
    return unformed(`the window ends at ${until} s, after the scenario, which lasts ${lasts} s`);
  return from < until ? undefined : unformed(`the window from ${from} s to ${until} s is empty`);
}

/** The signals whose traces a requirement needs. */
function followedBy({ signals, statement }: Requirement): string[] {
  return [...Object.values(signals), ...(statement ? signalsOfStatement(statement) : [])];
}

/** A result, or the reason why its numbers cannot be formed. */
function numeric<T>(form: () => T): T | string {
  try {
    return form();
  } catch (error) {
    if (error instanceof NumericFailure) return error.message;
    throw error;
  }
}

function endedEarly({ end }: Run): MeasureResult | undefined {
  const time = 'time' in end ? Number(end.time.toPrecision(4)) : 0;
  switch (end.kind) {
    case 'complete':
      return undefined;
    case 'overflow':
      return { kind: 'overflow', why: `'${end.state}' grew without bound by ${time} s`, time: end.time };
    case 'not_a_number':
      return unformed(`'${end.state}' is not a number at ${time} s`);
  }
}
