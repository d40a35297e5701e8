import { continuousImage } from './bilinear.js';
import { eigenvalues } from './eigenvalues.js';
import { add, identity, multiply, place, scale, transpose, zeros } from './matrix.js';
import { solve } from './solve.js';
import type { StateEquations } from './state_equations.js';

/** A quadratic form of a response y to an input u: output·|y|² + 2·across·Re(ūᵀy) + input·|u|². */
export interface QuadraticForm {
  output: number;
  /** Other than 0 only where there are as many outputs as inputs. */
  across: number;
  input: number;
}

/**
 * The returned function gives frequencies (rad/s, ascending) among which are all those at which a singular value of a
 * response without poles on the boundary of stability equals a level (Boyd, Balakrishnan and Kabamba, 1989). It throws
 * NumericFailure when the level equals a singular value of the feedthrough, or of the response at half the sampling frequency.
 */
export function prepareLevelFrequencies(system: StateEquations): (level: number) => number[] {
  const frequencies = prepareFormFrequencies(system);
  return (level) => frequencies({ output: -1, across: 0, input: level * level });
}

/**
 * The returned function gives frequencies (rad/s, ascending) among which are all those at which a quadratic form of a response
 * without poles on the boundary of stability is singular, that is, zero for some direction of the input. It throws
 * NumericFailure when the form is singular at infinite frequency, or of a sampled response at half the sampling frequency.
 */
export function prepareFormFrequencies(system: StateEquations): (form: QuadraticForm) => number[] {
  const { period } = system;
  if (period === undefined) return (form) => formFrequencies(system, form);
  const image = continuousImage(system);
  return (form) =>
    formFrequencies(image, form).map((frequency) => (2 * Math.atan((frequency * period) / 2)) / period);
}

/**
 * Of a continuous system: the sizes of the imaginary parts of the eigenvalues of a Hamiltonian matrix, which lie on the
 * imaginary axis exactly where the form is singular (Popov, 1973). All eigenvalues are given, also those off the axis: a
 * tolerance that tells them apart could lose one, and the caller looks at the response itself anyway.
 */
function formFrequencies(system: StateEquations, form: QuadraticForm): number[] {
  const { a, b, c, d } = system;
  const n = a.rows;
  const seen = transpose(c);
  let ofInput = add(scale(identity(d.columns), form.input), multiply(transpose(d), d), form.output);
  let mixed = scale(multiply(seen, d), form.output);
  if (form.across !== 0) {
    ofInput = add(ofInput, add(d, transpose(d)), form.across);
    mixed = add(mixed, seen, form.across);
  }
  const moved = add(a, multiply(b, solve(ofInput, transpose(mixed))), -1);
  const ofStates = add(
    scale(multiply(seen, c), form.output),
    multiply(mixed, solve(ofInput, transpose(mixed))),
    -1,
  );
  const hamiltonian = zeros(2 * n, 2 * n);
  place(hamiltonian, moved, 0, 0);
  place(hamiltonian, scale(multiply(b, solve(ofInput, transpose(b))), -1), 0, n);
  place(hamiltonian, scale(ofStates, -1), n, 0);
  place(hamiltonian, scale(transpose(moved), -1), n, n);
  const sizes = eigenvalues(hamiltonian).map(({ imaginary }) => Math.abs(imaginary));
  return [...new Set(sizes)].sort((x, y) => x - y);
}
