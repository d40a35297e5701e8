import { type Chain, reachedChain } from './chain.js';
import type { StateEquations } from './state_equations.js';

/**
 * The response from one input to all outputs as numerators over one common denominator, so that a pole on the boundary
 * of stability is nothing special. Both are known up to a common positive factor, which changes with frequency.
 */
export interface Transfer {
  outputs: number;
  /**
   * Writes the denominator (real, imaginary) and then each output's numerator at `frequency` (rad/s) into `into`, which
   * has room for 2 + 2·outputs numbers.
   */
  evaluate(frequency: number, into: Float64Array): void;
  /** As `evaluate`, then the derivatives of the same numbers by frequency in the same order; room for twice as many. */
  evaluateWithSlope(frequency: number, into: Float64Array): void;
}

/**
 * Prepares the response from input number `input`, once at a cost of n³, so that every frequency costs n².
 *
 * With the input entering the first state only and H in Hessenberg form, (p·I − H)·x = e₁·t is solved upwards from the
 * last row with the last state set to one (Hyman's method, in Wilkinson, 1965): the result is exact for a matrix that
 * differs from H by rounding only. For sampled systems p = e^{jωT} − 1 and `a` − I take the place of z and `a`: slow
 * poles and low frequencies keep their digits however short the period is.
 * @param deadTime pure delay in s: the response is multiplied by e^{−jω·deadTime}.
 */
export function prepareTransfer(system: StateEquations, input = 0, deadTime = 0): Transfer {
  const chain = reachedChain(system, input);
  const outputs = chain.d.length;
  const states = new Float64Array(2 * chain.n);
  const slopes = new Float64Array(2 * chain.n);
  const point = new Float64Array(4);
  return {
    outputs,
    evaluate(frequency, into) {
      placePoint(point, frequency, system.period);
      solveUpwards(chain, point, states, into);
      addOutputs(chain, states, into, 0);
      if (deadTime !== 0) delayOutputs(into, outputs, frequency, deadTime);
      normalise(into, 2 + 2 * outputs, 2 + 2 * outputs);
    },
    evaluateWithSlope(frequency, into) {
      const size = 2 + 2 * outputs;
      placePoint(point, frequency, system.period);
      solveUpwards(chain, point, states, into);
      solveSlopesUpwards(chain, point, states, slopes, into, size);
      addOutputs(chain, states, into, 0);
      addOutputs(chain, slopes, into, size);
      if (deadTime !== 0) delayOutputsAndSlopes(into, outputs, frequency, deadTime);
      normalise(into, size, 2 * size);
    },
  };
}

/** Writes p and dp/dω: real, imaginary, real, imaginary. */
function placePoint(point: Float64Array, frequency: number, period: number | undefined): void {
  if (period === undefined) {
    point[1] = frequency;
    point[3] = 1;
    return;
  }
  const half = Math.sin((frequency * period) / 2);
  point[0] = -2 * half * half;
  point[1] = Math.sin(frequency * period);
  point[2] = -period * point[1];
  point[3] = period * (1 + point[0]);
}

/** States beyond this size are scaled down together, long before they leave the number range. */
const LARGE = 1e100;

/** Fills the states (real parts, then imaginary parts) and writes the denominator t to into[0], into[1]. */
function solveUpwards(chain: Chain, point: Float64Array, x: Float64Array, into: Float64Array): void {
  const { n, h, inverse } = chain;
  const pReal = point[0];
  const pImaginary = point[1];
  let real = 1;
  let imaginary = 0;
  for (let i = n - 1; i >= 0; i--) {
    x[i] = real;
    x[n + i] = imaginary;
    let sumReal = pReal * real - pImaginary * imaginary;
    let sumImaginary = pReal * imaginary + pImaginary * real;
    for (let j = i, at = i * n + i; j < n; j++, at++) {
      sumReal -= h[at] * x[j];
      sumImaginary -= h[at] * x[n + j];
    }
    const divisor = i === 0 ? 1 : inverse[i];
    real = sumReal * divisor;
    imaginary = sumImaginary * divisor;
    if (Math.abs(real) + Math.abs(imaginary) > LARGE) {
      real /= LARGE;
      imaginary /= LARGE;
      for (let j = i; j < n; j++) {
        x[j] /= LARGE;
        x[n + j] /= LARGE;
      }
    }
  }
  into[0] = real;
  into[1] = imaginary;
}

/** The derivative of the same recurrence by frequency, for the states as they stand (the last one is constant). */
function solveSlopesUpwards(
  chain: Chain,
  point: Float64Array,
  x: Float64Array,
  slopes: Float64Array,
  into: Float64Array,
  at: number,
): void {
  const { n, h, inverse } = chain;
  let real = 0;
  let imaginary = 0;
  for (let i = n - 1; i >= 0; i--) {
    slopes[i] = real;
    slopes[n + i] = imaginary;
    let sumReal = point[0] * real - point[1] * imaginary + point[2] * x[i] - point[3] * x[n + i];
    let sumImaginary = point[0] * imaginary + point[1] * real + point[2] * x[n + i] + point[3] * x[i];
    for (let j = i; j < n; j++) {
      sumReal -= h[i * n + j] * slopes[j];
      sumImaginary -= h[i * n + j] * slopes[n + j];
    }
    const divisor = i === 0 ? 1 : inverse[i];
    real = sumReal * divisor;
    imaginary = sumImaginary * divisor;
  }
  into[at] = real;
  into[at + 1] = imaginary;
}

/** Writes c·x + d·t for each output after the denominator t, which stands at into[at]. */
function addOutputs(chain: Chain, x: Float64Array, into: Float64Array, at: number): void {
  const { n, c, d } = chain;
  for (let k = 0; k < d.length; k++) {
    let real = d[k] * into[at];
    let imaginary = d[k] * into[at + 1];
    for (let i = 0; i < n; i++) {
      real += c[k * n + i] * x[i];
      imaginary += c[k * n + i] * x[n + i];
    }
    into[at + 2 + 2 * k] = real;
    into[at + 3 + 2 * k] = imaginary;
  }
}

function delayOutputs(into: Float64Array, outputs: number, frequency: number, deadTime: number): void {
  for (let k = 1; k <= outputs; k++) turn(into, 2 * k, -frequency * deadTime);
}

function delayOutputsAndSlopes(
  into: Float64Array,
  outputs: number,
  frequency: number,
  deadTime: number,
): void {
  const size = 2 + 2 * outputs;
  for (let k = 1; k <= outputs; k++) {
    const at = 2 * k;
    // The derivative of N·e^{−jωτ} is (N′ − jτ·N)·e^{−jωτ}.
    into[size + at] += deadTime * into[at + 1];
    into[size + at + 1] -= deadTime * into[at];
    turn(into, at, -frequency * deadTime);
    turn(into, size + at, -frequency * deadTime);
  }
}

function turn(into: Float64Array, at: number, angle: number): void {
  const cosine = Math.cos(angle);
  const sine = Math.sin(angle);
  const real = into[at];
  into[at] = real * cosine - into[at + 1] * sine;
  into[at + 1] = real * sine + into[at + 1] * cosine;
}

/** Divides the first `length` numbers by the largest of the first `size`, so that products of them stay in range. */
function normalise(into: Float64Array, size: number, length: number): void {
  let largest = 0;
  for (let i = 0; i < size; i++) largest = Math.max(largest, Math.abs(into[i]));
  if (!(largest > 0)) return;
  for (let i = 0; i < length; i++) into[i] /= largest;
}
