import { magnitude } from '../linear/complex.js';
import { eigenvalues } from '../linear/eigenvalues.js';
import { discretise } from '../linear/exponential.js';
import { Linearisation } from '../linear/linearise.js';
import { type Matrix, place, zeros } from '../linear/matrix.js';
import { Evaluation } from '../loop/evaluate.js';
import { dependsOn } from '../loop/graph.js';
import type { CompiledLoop } from './compile.js';

/** How the continuous states of one plant move: steps for each duration, and the movement of one step. */
export interface Movement {
  /** Number of equal steps in a segment of this duration (s). */
  steps: (duration: number) => number;
  /** Moves the states in `m` by one step of h (s). */
  move: (m: Float64Array, h: number) => void;
}

/** A step this long against the fastest rate (1/s) is where the first attempt starts; halving then checks it. */
const firstStep = 0.4;
/** An exact movement needs steps only for the shape of the trace between them. */
const mostSteps = { exact: 16, integrated: 4096 };

/** Chooses for a loop how its plants move: exactly where the plant is linear, by small steps where it is not. */
export class MovementChoice {
  readonly linear: boolean;
  private readonly linearisation: Linearisation;

  constructor(private readonly compiled: CompiledLoop) {
    this.linearisation = new Linearisation(compiled.loop);
    this.linear = isLinear(this.linearisation);
  }

  /**
   * @param start the array at the point of rest; its parameters make the plant.
   * @param halvings every step is halved so many times against the first attempt.
   */
  of(start: Float64Array, halvings: number): Movement {
    const { loop, layout } = this.compiled;
    const part = (from: number, length: number): Float64Array => start.slice(from, from + length);
    const parameter = part(layout.parameter, loop.parameters.length);
    const evaluation = new Evaluation({
      parameter,
      input: part(layout.input, loop.inputs.length),
      state: part(layout.state, loop.states.length),
      held: part(layout.held, loop.held.length),
    });
    const rates = this.linearisation.slopes('derivative', 'state', evaluation);
    const fastest = fastestRate(rates);
    const most = this.linear ? mostSteps.exact : mostSteps.integrated;
    const steps = (duration: number): number =>
      Math.min(most, Math.max(1, Math.ceil((duration * fastest) / firstStep))) * 2 ** halvings;
    return { steps, move: this.linear ? this.exactMove(rates, parameter) : this.compiled.step };
  }

  /** Movement of a linear plant under constant inputs by the matrix exponential; a table is kept for each length of step. */
  private exactMove(rates: Matrix, parameter: Float64Array): Movement['move'] {
    const { loop, layout } = this.compiled;
    const sources = [
      ...loop.states.map((_, i) => layout.state + i),
      ...loop.held.map((_, i) => layout.held + i),
      ...loop.inputs.map((_, i) => layout.input + i),
    ];
    const input = this.constantInputs(new Evaluation({ parameter }));
    const tables = new Map<number, Float64Array>();
    const moved = new Float64Array(rates.rows);
    return (m, duration) => {
      let table = tables.get(duration);
      if (!table) {
        table = joined(discretise(rates, input, duration));
        tables.set(duration, table);
      }
      let at = 0;
      for (let i = 0; i < moved.length; i++) {
        let sum = 0;
        for (let j = 0; j < sources.length; j++) sum += table[at++] * m[sources[j]];
        moved[i] = sum + table[at++];
      }
      m.set(moved, layout.state);
    };
  }

  /** Columns for held values, inputs, and the constant part of the rates. */
  private constantInputs(evaluation: Evaluation): Matrix {
    const { loop, roots } = this.linearisation;
    const [h, u] = [loop.held.length, loop.inputs.length];
    const input = zeros(loop.states.length, h + u + 1);
    place(input, this.linearisation.slopes('derivative', 'held', evaluation), 0, 0);
    place(input, this.linearisation.slopes('derivative', 'input', evaluation), 0, h);
    roots.derivative.forEach((node, i) => {
      input.data[i * input.columns + h + u] = evaluation.of(node);
    });
    return input;
  }
}

function joined({ phi, gamma }: { phi: Matrix; gamma: Matrix }): Float64Array {
  const table = zeros(phi.rows, phi.columns + gamma.columns);
  place(table, phi, 0, 0);
  place(table, gamma, 0, phi.columns);
  return table.data;
}

/** Whether every rate is a sum of states, held values and inputs with factors that only parameters set. */
function isLinear(linearisation: Linearisation): boolean {
  return (['state', 'held', 'input'] as const).every((columns) =>
    linearisation
      .entries('derivative', columns)
      .every(({ slope }) => !dependsOn(slope, ['state', 'held', 'input', 'memory', 'reading'])),
  );
}

function fastestRate(rates: Matrix): number {
  if (rates.rows === 0 || !rates.data.every(Number.isFinite)) return 0;
  return Math.max(...eigenvalues(rates).map(magnitude));
}
