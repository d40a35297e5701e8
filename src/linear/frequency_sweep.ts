import type { Complex } from './complex.js';
import { frequencyGrid } from './frequency_grid.js';
import type { StateEquations } from './state_equations.js';
import { prepareTransfer, type Transfer } from './transfer.js';

/** A response with one input and one output, evaluated at frequencies that follow its features. */
export interface FrequencySweep {
  transfer: Transfer;
  /** Sampling period in s, or undefined for a continuous response. */
  period: number | undefined;
  /** rad/s, ascending: 0, the grid, and for a sampled system half the sampling frequency. */
  frequencies: number[];
  /** Denominator and numerator at each frequency: real, imaginary, real, imaginary. */
  parts: Float64Array;
  /** Index of the last frequency that is neither 0 nor half the sampling frequency; the first is 1. */
  lastInner: number;
}

/**
 * Evaluates a response over its whole range of frequencies.
 * @param features poles and zeros (z − 1 for a sampled system) near which the steps are short.
 * @param deadTime pure delay in s, of continuous systems.
 */
export function sweepOf(system: StateEquations, features: readonly Complex[], deadTime = 0): FrequencySweep {
  const grid = frequencyGrid(features, system.period, deadTime);
  const frequencies = [0, ...grid];
  if (system.period !== undefined) frequencies.push(Math.PI / system.period);
  const transfer = prepareTransfer(system, 0, deadTime);
  const parts = new Float64Array(4 * frequencies.length);
  const scratch = new Float64Array(4);
  for (let i = 0; i < frequencies.length; i++) {
    transfer.evaluate(frequencies[i], scratch);
    parts.set(scratch, 4 * i);
  }
  return { transfer, period: system.period, frequencies, parts, lastInner: grid.length };
}
