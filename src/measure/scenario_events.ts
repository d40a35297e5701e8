import type { InputChange } from '../kernel/timeline.js';
import { Evaluation } from '../loop/evaluate.js';
import { dependsOn, type Node } from '../loop/graph.js';
import type { InputEvent, Scenario, Spec } from '../spec/spec.js';
import type { TargetStep } from './measure.js';

/** Turns an expression of parameters into a node of the loop's graph. */
export type LowerPlain = (expression: InputEvent['at']) => Node;

interface Event {
  input: number;
  amount: Node;
  at: Node;
  /** Undefined for a step, which lasts to the end. */
  lasts: Node | undefined;
}

/** What the inputs of a scenario do, for any plant: amounts and times may depend on parameters. */
export class ScenarioEvents {
  private readonly events: Event[];
  readonly sameForAllPlants: boolean;

  constructor(
    private readonly spec: Spec,
    private readonly scenario: Scenario,
    lower: LowerPlain,
  ) {
    this.events = Object.entries(scenario.inputs).flatMap(([name, events]) => {
      const input = spec.inputs.findIndex((candidate) => candidate.name === name);
      return events.map((event) => ({
        input,
        amount: lower(event.amount),
        at: lower(event.at),
        lasts: event.kind === 'pulse' ? lower(event.lasts) : undefined,
      }));
    });
    this.sameForAllPlants = this.events.every(({ amount, at, lasts }) =>
      [amount, at, lasts].every((node) => !node || !dependsOn(node, ['parameter'])),
    );
  }

  /** The changes of all inputs in order of time; each gives the input's value from then on. */
  changes(parameters: ArrayLike<number>): InputChange[] {
    const evaluation = new Evaluation({ parameter: parameters });
    const added = this.events.flatMap(({ input, amount, at, lasts }) => {
      const time = evaluation.of(at);
      const value = evaluation.of(amount);
      const begin = { input, time, value };
      return lasts ? [begin, { input, time: time + evaluation.of(lasts), value: -value }] : [begin];
    });
    const values = this.spec.inputs.map(({ rest }) => rest);
    return added
      .sort((a, b) => a.time - b.time)
      .map(({ input, time, value }) => {
        values[input] += value;
        return { input, time, value: values[input] };
      });
  }

  /** Time of the first event, s; 0 where nothing happens. */
  firstEvent(parameters: ArrayLike<number>): number {
    return this.changes(parameters)[0]?.time ?? 0;
  }

  /** The first step of an input, from its value before to its value after, until its next change or the end. */
  stepOf(name: string, parameters: ArrayLike<number>): TargetStep | undefined {
    const input = this.spec.inputs.findIndex((candidate) => candidate.name === name);
    const own = this.changes(parameters).filter((change) => change.input === input);
    if (own.length === 0) return undefined;
    const before = this.spec.inputs[input].rest;
    const until = own[1]?.time ?? this.scenario.lasts;
    return own[0].value === before ? undefined : { time: own[0].time, before, after: own[0].value, until };
  }
}
