import type { Scenario, Spec } from '../spec/spec.js';
import type { Evaluation } from './evaluate.js';
import { dependsOn, type Node } from './graph.js';
import { shapes } from './inputs/index.js';
import type { Change, InputDesk } from './inputs/shape.js';
import type { DelayedSource, ProgrammedChange } from './loop.js';
import type { Parts } from './parts.js';

const shapeByKey = new Map(shapes.map((shape) => [shape.description.key, shape]));

/** What the inputs of a scenario do: the value of each input as an expression, and a program of changes over time. */
export class InputProgram {
  private readonly values: readonly Node[];

  /** @param lower turns an expression of parameters into a node. */
  constructor(
    spec: Spec,
    scenario: Scenario | undefined,
    private readonly parts: Parts,
    private readonly lower: (expression: Scenario['inputs'][string][number]['at']) => Node,
  ) {
    this.values = spec.inputs.map(({ name }, index) => {
      const events = scenario && Object.hasOwn(scenario.inputs, name) ? scenario.inputs[name] : [];
      return events.reduce<Node>(
        (value, event, k) =>
          this.withEvent(value, name, index, event, scenario!, spec.perturbation.seed + 31 * k),
        parts.graph.leaf('input', index),
      );
    });
  }

  /** The input's value, SI. */
  value(index: number): Node {
    return this.values[index];
  }

  /** All changes, those of copies behind a dead time included. */
  finished(delayed: readonly DelayedSource[]): ProgrammedChange[] {
    const program = [...this.parts.program];
    for (const { kind, index, source, delay } of delayed) {
      const own = program.filter((change) => change.kind === kind && change.index === source);
      for (const change of own) {
        const common = change.common && !dependsOn(delay, ['parameter']);
        program.push({ ...change, index, common, changes: later(change.changes, delay) });
      }
    }
    return program;
  }

  private withEvent(
    value: Node,
    name: string,
    index: number,
    event: Scenario['inputs'][string][number],
    scenario: Scenario,
    seed: number,
  ): Node {
    const settings = new Map(
      Object.entries(event.settings).map(([key, expression]) => [key, this.lower(expression)]),
    );
    const use = {
      name,
      seed,
      at: this.lower(event.at),
      lasts: event.lasts && this.lower(event.lasts),
      setting: (key: string) => settings.get(key),
      points: (key: string) => event.points[key],
      scenarioLasts: scenario.lasts,
    };
    const nodes = [use.at, use.lasts, ...settings.values()];
    const common = nodes.every((node) => !node || !dependsOn(node, ['parameter']));
    const added = shapeByKey.get(event.shape)!.build(use, this.desk(index, common));
    return added ? this.parts.plain.add(value, added) : value;
  }

  private desk(index: number, common: boolean): InputDesk {
    const { parts } = this;
    const { program } = parts;
    return {
      number: (value) => parts.graph.number(value),
      multiply: (a, b) => parts.plain.multiply(a, b),
      sine: (angle) => parts.graph.apply('sin', angle),
      add: (changes) => program.push({ kind: 'input', index, how: 'add', common, changes }),
      constant: (name, changes) => {
        const constant = parts.addInput(name, 0);
        program.push({ kind: 'input', index: constant.index, how: 'set', common, changes });
        return constant;
      },
      motion: (name, rate, sets) => {
        const state: ReturnType<Parts['addState']> = parts.addState(name, 0, () => rate(state));
        program.push({ kind: 'state', index: state.index, how: 'set', common, changes: sets });
        return state;
      },
    };
  }
}

function later(changes: ProgrammedChange['changes'], delay: Node): ProgrammedChange['changes'] {
  return (plant: Evaluation): Change[] =>
    changes(plant).map(({ time, value }) => ({ time: time + plant.of(delay), value }));
}
