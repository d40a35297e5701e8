import { magnitude } from '../linear/complex.js';
import { eigenvalues } from '../linear/eigenvalues.js';
import { discretise } from '../linear/exponential.js';
import { Linearisation } from '../linear/linearise.js';
import { type Matrix, place, zeros } from '../linear/matrix.js';
import { allAffine } from '../loop/affine.js';
import { Evaluation } from '../loop/evaluate.js';
import type { CompiledLoop } from './compile.js';

/** How the continuous states of one plant move: steps for each duration, and the movement of one step. */
export interface Movement {
  /** Lengths (s) of the steps in a segment of this duration (s), in order; few are different. */
  steps: (duration: number) => number[];
  /** Moves the states in `m` by one step of h (s). */
  move: (m: Float64Array, h: number) => void;
}

/** A step this long against the fastest rate (1/s) is where the first attempt starts; halving then checks it. */
const firstStep = 0.4;
/**
 * An exact movement needs steps only for the shape of the trace between them: with this length the times of crossings and
 * extremes are good to 1e-6, and halving shows it.
 */
const exactStep = 0.3;
const mostTables = 256;
const mostSteps = { exact: 256, stiff: 64, integrated: 256 };

/** Chooses for a loop how its plants move: exactly where the plant is linear, by small steps where it is not. */
export class MovementChoice {
  readonly linear: boolean;
  private readonly linearisation: Linearisation;

  constructor(private readonly compiled: CompiledLoop) {
    this.linearisation = new Linearisation(compiled.loop);
    this.linear = allAffine(this.linearisation.roots.derivative);
  }

  /**
   * @param start the array at the point of rest; its parameters make the plant.
   * @param longest the longest segment, s: with very many steps in it the plant counts as stiff.
   * @param halvings every step is halved so many times against the first attempt.
   */
  of(start: Float64Array, longest: number, halvings: number): Movement {
    const { loop, layout } = this.compiled;
    const part = (from: number, length: number): Float64Array => start.slice(from, from + length);
    const parameter = part(layout.parameter, loop.parameters.length);
    const evaluation = new Evaluation({
      parameter,
      input: part(layout.input, loop.inputs.length),
      state: part(layout.state, loop.states.length),
      mode: part(layout.mode, loop.modes.length),
      held: part(layout.held, loop.held.length),
    });
    const rates = this.linearisation.slopes('derivative', 'state', evaluation);
    const modes = modesOf(rates);
    if (this.linear) {
      const steps = (duration: number): number[] =>
        halved(gradedSteps(duration, modes, exactStep, mostSteps.exact), halvings);
      return { steps, move: this.exactMove(rates, parameter) };
    }
    const fastest = Math.max(0, ...modes.map(({ speed }) => speed));
    const stepsNeeded = (duration: number): number =>
      Math.max(1, Math.ceil((duration * fastest) / firstStep));
    if (stepsNeeded(longest) > mostSteps.integrated) {
      const steps = (duration: number): number[] =>
        halved(gradedSteps(duration, modes, firstStep, mostSteps.stiff), halvings);
      return { steps, move: this.compiled.stiffStep };
    }
    const steps = (duration: number): number[] => halved(equal(duration, stepsNeeded(duration)), halvings);
    return { steps, move: this.compiled.step };
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
        // Steps that end at a jump are all different and never come again.
        if (tables.size < mostTables) tables.set(duration, table);
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

/** How fast a natural motion of the plant is, and how fast it dies out; 1/s. */
interface PlantMode {
  speed: number;
  decay: number;
}

function modesOf(rates: Matrix): PlantMode[] {
  if (rates.rows === 0 || !rates.data.every(Number.isFinite)) return [];
  return eigenvalues(rates).map((pole) => ({ speed: magnitude(pole), decay: Math.max(0, -pole.real) }));
}

function equal(duration: number, count: number): number[] {
  return new Array<number>(count).fill(duration / count);
}

function halved(lengths: number[], halvings: number): number[] {
  return lengths.flatMap((length) => equal(length, 2 ** halvings));
}

/** The error of a trace between steps grows with this power of their length. */
const order = 6;

/**
 * Steps over a segment at whose start something changed, each a power of two shorter than it: short while the fast motions
 * last, longer when they have died out. A motion that would need more than `most` steps gets them longer.
 * @param longest length of a step against the speed of a motion that lasts.
 */
function gradedSteps(duration: number, modes: readonly PlantMode[], longest: number, most: number): number[] {
  const felt = modes.map(({ speed, decay }) => {
    const needed = (Math.min(duration, order / decay) * speed) / longest;
    return { decay, speed: speed * Math.min(1, most / needed) };
  });
  const steps: number[] = [];
  const split = (from: number, length: number): void => {
    const tooLong = felt.some(
      ({ speed, decay }) => speed * length * Math.exp((-decay * from) / order) > longest,
    );
    if (tooLong) {
      split(from, length / 2);
      split(from + length / 2, length / 2);
    } else steps.push(length);
  };
  split(0, duration);
  return steps;
}
