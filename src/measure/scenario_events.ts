import type { ScenarioChange } from '../kernel/timeline.js';
import { Evaluation } from '../loop/evaluate.js';
import type { Loop } from '../loop/loop.js';
import type { Scenario } from '../spec/spec.js';
import type { TargetStep } from './measure.js';

/** What the inputs of a scenario do, for any plant: amounts and times may depend on parameters. */
export class ScenarioEvents {
  /** @param loop expanded with the scenario. */
  constructor(
    private readonly loop: Loop,
    private readonly scenario: Scenario,
  ) {}

  /** Whether every plant meets the same changes. */
  get sameForAllPlants(): boolean {
    return this.loop.program.every(({ common }) => common);
  }

  /** All changes in order of time; each gives the value from then on. */
  changes(parameters: ArrayLike<number>): ScenarioChange[] {
    const plant = new Evaluation({ parameter: parameters });
    const values = [...this.loop.inputRest];
    return this.loop.program
      .flatMap(({ kind, index, how, changes }) =>
        changes(plant).map(({ time, value }) => ({ kind, index, how, time, value })),
      )
      .sort((a, b) => a.time - b.time)
      .map(({ kind, index, how, time, value }) => {
        if (kind === 'state' || how === 'set') return { kind, index, time, value };
        values[index] += value;
        return { kind, index, time, value: values[index] };
      });
  }

  /** Time of the first event, s; 0 where nothing happens. */
  firstEvent(parameters: ArrayLike<number>): number {
    return this.changes(parameters)[0]?.time ?? 0;
  }

  /** The first step of an input, from its value before to its value after, until its next change or the end. */
  stepOf(name: string, parameters: ArrayLike<number>): TargetStep | undefined {
    const input = this.loop.inputs.indexOf(name);
    const own = this.changes(parameters).filter(({ kind, index }) => kind === 'input' && index === input);
    if (own.length === 0) return undefined;
    const before = this.loop.inputRest[input];
    const until = own[1]?.time ?? this.scenario.lasts;
    return own[0].value === before ? undefined : { time: own[0].time, before, after: own[0].value, until };
  }
}
