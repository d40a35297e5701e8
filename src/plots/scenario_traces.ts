import { TraceStore } from '../kernel/run_plant.js';
import { Linearisation } from '../linear/linearise.js';
import { NumericFailure } from '../linear/numeric_failure.js';
import { pointOfRest } from '../linear/point_of_rest.js';
import { expandLoop } from '../loop/expand.js';
import type { Loop } from '../loop/loop.js';
import type { CoefficientValues } from '../loop/parts.js';
import { type Schedule, scheduleOf } from '../loop/schedule.js';
import { valueAt } from '../measure/bernstein.js';
import { type Curve, endOf, pieceAt, pieceOf, valueBefore } from '../measure/curve.js';
import type { TargetStep } from '../measure/measure.js';
import { ScenarioEvents } from '../measure/scenario_events.js';
import { ScenarioRun, timingIsCommon } from '../measure/scenario_run.js';
import type { Scenario, Spec } from '../spec/spec.js';

/** So many instants a curve is looked at: more than a drawing of that width can show. */
const instants = 400;

/** The signals of one scenario over time, for plant after plant, all at the same instants. */
export class ScenarioTraces {
  private readonly events: ScenarioEvents;
  /** s, rising; each change of an input stands there twice, before and after it. */
  readonly times: readonly number[];
  private readonly run: ScenarioRun;
  private readonly linearisation: Linearisation;
  private readonly loop: Loop;
  private readonly commonSchedule: Schedule | undefined;

  /** @param signals what to follow. */
  constructor(
    spec: Spec,
    coefficients: CoefficientValues,
    private readonly scenario: Scenario,
    private readonly signals: readonly string[],
    private readonly halvings: number,
    /** At so many even instants. */
    count = instants,
  ) {
    this.loop = expandLoop(spec, coefficients, { scenario });
    this.linearisation = new Linearisation(this.loop);
    this.events = new ScenarioEvents(this.loop, scenario);
    const seed = spec.perturbation.seed + spec.scenarios.indexOf(scenario);
    this.run = new ScenarioRun(this.loop, scenario, this.events, signals, seed, new TraceStore());
    const nominal = spec.parameters.map((parameter) => parameter.nominal);
    this.commonSchedule = timingIsCommon(this.loop) ? scheduleOf(this.loop, nominal) : undefined;
    const changes = new Set(this.events.changes(nominal).map(({ time }) => time));
    this.times = instantsOf(scenario.lasts, [...changes], count);
  }

  /**
   * The values of each signal at the instants, SI; not-a-number from where the plant cannot be followed any more.
   * Undefined for a plant that cannot be started.
   */
  of(plant: Float64Array): Map<string, number[]> | undefined {
    try {
      return this.followed(plant);
    } catch (error) {
      if (error instanceof NumericFailure) return undefined;
      throw error;
    }
  }

  /** The step of a target for the nominal plant. */
  stepOf(target: string, nominal: ArrayLike<number>): TargetStep | undefined {
    return this.events.stepOf(target, nominal);
  }

  /** Time of the first event for a plant, s. */
  firstEvent(plant: ArrayLike<number>): number {
    return this.events.firstEvent(plant);
  }

  private followed(plant: Float64Array): Map<string, number[]> | undefined {
    const rest =
      this.scenario.start === 'rest'
        ? pointOfRest(this.linearisation, plant, this.loop.inputRest)
        : undefined;
    if (rest?.kind === 'none') return undefined;
    const schedule = this.commonSchedule ?? scheduleOf(this.loop, plant);
    const run = this.run.run(plant, rest?.point, schedule, this.halvings);
    if (run.pieces === 0) return undefined;
    // Of a run that ends early the last piece is drawn out to the end of the scenario.
    const last = run.times[run.end.kind === 'complete' ? run.pieces : run.pieces - 1];
    return new Map(this.signals.map((name) => [name, samples(this.run.curve(run, name), this.times, last)]));
  }
}

/** Even instants from 0 to the end, and both sides of each change in between. */
function instantsOf(lasts: number, changes: readonly number[], count: number): number[] {
  const even = Array.from({ length: count }, (_, at) => (at * lasts) / (count - 1));
  const twice = changes.filter((time) => time > 0 && time < lasts).flatMap((time) => [time, time]);
  const apart = even.filter((time) => !twice.includes(time));
  return [...apart, ...twice].sort((a, b) => a - b);
}

/** The values at some times, not-a-number after `last`. */
function samples(curve: Curve, times: readonly number[], last: number): number[] {
  return times.map((time, at) => {
    if (time > last) return Number.NaN;
    const isBefore = times[at + 1] === time;
    return isBefore || time === endOf(curve) ? valueBefore(curve, time) : valueAfter(curve, time);
  });
}

function valueAfter(curve: Curve, time: number): number {
  const piece = pieceAt(curve, time);
  const { times } = curve;
  return valueAt(pieceOf(curve, piece), (time - times[piece]) / (times[piece + 1] - times[piece]));
}
