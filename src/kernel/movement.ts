import { magnitude } from '../linear/complex.js';
import { eigenvalues } from '../linear/eigenvalues.js';
import { type Matrix, zeros } from '../linear/matrix.js';
import type { CompiledLoop } from './compile.js';
import { ExactMovement } from './exact_movement.js';
import { IntegratedMovement } from './integrated_movement.js';

/** How the continuous states of one plant move: steps for each duration, and the movement of one step. */
export interface Movement {
  /** Lengths (s) of the steps in a segment of this duration (s), in order; few are different. */
  steps: (duration: number) => number[];
  /**
   * Moves the states in `m` by at most a share of one step of h (s): 1, or a multiple of `finestShare` below it.
   * @returns the share by which it moved: less where so long a step would not be safe.
   */
  move: (m: Float64Array, h: number, most: number) => number;
}

/** To this share of a step the time of a jump is found. */
export const finestShare = 2 ** -40;

/** A step this long against the fastest rate (1/s) is where the first attempt starts; halving then checks it. */
const firstStep = 0.4;
/**
 * An exact movement needs steps only for the shape of the trace between them: with this length the times of crossings and
 * extremes are good to 1e-6, and halving shows it.
 */
const exactStep = 0.3;
const mostSteps = { exact: 256, stiff: 64, integrated: 256 };

/**
 * Chooses how a plant moves: exactly where it is linear, by small steps where it is not.
 * @param start the array at the point of rest; its parameters make the plant.
 * @param longest the longest segment, s: with very many steps in it the plant counts as stiff.
 * @param halvings every step is halved so many times against the first attempt.
 */
export function movementOf(
  compiled: CompiledLoop,
  start: Float64Array,
  longest: number,
  halvings: number,
): Movement {
  if (compiled.affine) {
    const exact = new ExactMovement(compiled, compiled.affine);
    const modes = modesOf(exact.rates(start));
    const steps = (duration: number): number[] =>
      halved(gradedSteps(duration, modes, exactStep, mostSteps.exact), halvings);
    return { steps, move: (m, h, most) => exact.move(m, h, most) };
  }
  const n = compiled.loop.states.length;
  const slopes = zeros(n, n);
  compiled.slopes(start, slopes.data);
  const modes = modesOf(slopes);
  const fastest = Math.max(0, ...modes.map(({ speed }) => speed));
  const stepsNeeded = (duration: number): number => Math.max(1, Math.ceil((duration * fastest) / firstStep));
  const stiff = stepsNeeded(longest) > mostSteps.integrated;
  const integrated = new IntegratedMovement(compiled, start, slopes, { stiff, halvings });
  const first = (duration: number): number[] =>
    stiff ? gradedSteps(duration, modes, firstStep, mostSteps.stiff) : equal(duration, stepsNeeded(duration));
  return {
    steps: (duration) => halved(first(duration), halvings),
    move: (m, h, share) => integrated.move(m, h, share),
  };
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
