import { eigenvalues } from './eigenvalues.js';
import { add, identity, multiply, place, scale, transpose, zeros } from './matrix.js';
import { solve } from './solve.js';
import type { StateEquations } from './state_equations.js';

/**
 * Frequencies (rad/s, ascending) among which are all those at which a singular value of a stable continuous response
 * equals `level`: the sizes of the imaginary parts of the eigenvalues of a Hamiltonian matrix, which lie on the imaginary
 * axis exactly there (Boyd, Balakrishnan and Kabamba, 1989). All eigenvalues are given, also those off the axis: a
 * tolerance that tells them apart could lose one, and the caller looks at the response itself anyway.
 * @param level larger than the largest gain at infinite frequency.
 * @throws NumericFailure when the level equals a singular value of the feedthrough.
 */
export function levelFrequencies(system: StateEquations, level: number): number[] {
  const { a, b, c, d } = system;
  const n = a.rows;
  const through = transpose(d);
  const rest = add(scale(identity(d.columns), level * level), multiply(through, d), -1);
  const solved = solve(rest, transpose(b));
  const moved = add(a, multiply(b, solve(rest, multiply(through, c))));
  const weight = add(identity(d.rows), multiply(d, solve(rest, through)));
  const hamiltonian = zeros(2 * n, 2 * n);
  place(hamiltonian, moved, 0, 0);
  place(hamiltonian, multiply(b, solved), 0, n);
  place(hamiltonian, scale(multiply(transpose(c), multiply(weight, c)), -1), n, 0);
  place(hamiltonian, scale(transpose(moved), -1), n, n);
  const sizes = eigenvalues(hamiltonian).map(({ imaginary }) => Math.abs(imaginary));
  return [...new Set(sizes)].sort((x, y) => x - y);
}
