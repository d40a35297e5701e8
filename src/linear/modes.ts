import { closedLoopMatrix } from './closed_loop.js';
import type { Complex } from './complex.js';
import type { Matrix } from './matrix.js';
import { polesOf } from './poles.js';
import type { StateEquations } from './state_equations.js';

/** One natural motion of a system, e^{st}. For a sampled system s = ln(z)/T with the angle of z in (−π, π]. */
export interface Mode {
  /** s in 1/s and rad/s; real part −Infinity for a motion that is over after one sample. */
  pole: Complex;
  /** −Re s, in 1/s: the motion shrinks by e every 1/decayRate seconds. Negative for a growing motion. */
  decayRate: number;
  /** −Re s/|s|: 1 for a motion without oscillation, 0 for one that never decays, negative for one that grows. */
  dampingRatio: number;
}

/** The modes of a state matrix, slowest decay first. @param period sampling period in s, or undefined when continuous. */
export function modesOf(a: Matrix, period: number | undefined): Mode[] {
  return polesOf(a, period)
    .map((pole) => modeOf(period === undefined ? pole : exponentOf(pole, period)))
    .sort((one, other) => one.decayRate - other.decayRate);
}

/** How the closed loop comes to rest. */
export interface ClosedLoopDecay {
  /** Least damping ratio of all modes; 1 for a loop without states. */
  dampingRatio: number;
  /** Decay rate of the slowest mode in 1/s; Infinity for a loop without states. */
  decayRate: number;
}

/**
 * Damping and decay of a loop transfer L closed with negative feedback.
 * @throws as `sensitivityOf`.
 */
export function closedLoopDecay(loop: StateEquations): ClosedLoopDecay {
  const modes = modesOf(closedLoopMatrix(loop), loop.period);
  return {
    dampingRatio: Math.min(1, ...modes.map(({ dampingRatio }) => dampingRatio)),
    decayRate: Math.min(Number.POSITIVE_INFINITY, ...modes.map(({ decayRate }) => decayRate)),
  };
}

function modeOf(pole: Complex): Mode {
  return { pole, decayRate: -pole.real, dampingRatio: dampingRatioOf(pole) };
}

/** −Re s/|s|. */
export function dampingRatioOf({ real, imaginary }: Complex): number {
  const size = Math.hypot(real, imaginary);
  return size === 0 ? 0 : size === Number.POSITIVE_INFINITY ? 1 : -real / size;
}

/**
 * s = ln(z)/T, in 1/s and rad/s, with the angle of z in (−π, π]. @param pole z − 1: slow motions keep their digits.
 */
export function exponentOf({ real, imaginary }: Complex, period: number): Complex {
  return {
    real: Math.log1p(Math.max(-1, 2 * real + real * real + imaginary * imaginary)) / (2 * period),
    imaginary: Math.atan2(imaginary, 1 + real) / period,
  };
}
