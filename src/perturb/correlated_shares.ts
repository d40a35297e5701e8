import { LoopError } from '../loop/loop.js';
import type { Correlation, ParameterDefinition } from '../spec/spec.js';
import { normalQuantile, normalShareBelow } from './normal_distribution.js';

/** Turns independent shares (0 to 1), one for each parameter, into correlated ones, in place. */
export type Correlate = (shares: Float64Array) => void;

/**
 * Correlates the shares through normal variables (a Gaussian copula): the rank correlation ρ of two parameters is that of
 * normal variables with correlation 2·sin(π·ρ/6) (Pearson 1907), whatever the distributions.
 * @returns undefined where nothing is correlated.
 * @throws {LoopError} when no distribution has all these correlations together.
 */
export function correlate(
  parameters: readonly ParameterDefinition[],
  correlations: readonly Correlation[],
): Correlate | undefined {
  if (correlations.length === 0) return undefined;
  const names = [...new Set(correlations.flatMap((one) => [one.of, one.with]))];
  const indices = names.map((name) => parameters.findIndex((parameter) => parameter.name === name));
  const factor = triangularFactor(matrixOf(names, correlations));
  if (!factor) {
    throw new LoopError(
      `the correlations of ${names.map((name) => `\`${name}\``).join(', ')} cannot all hold at once; expected smaller coefficients, or fewer of them`,
      correlations[0].place,
    );
  }
  return (shares) => {
    const normal = indices.map((index) => normalQuantile(inside(shares[index])));
    indices.forEach((index, row) => {
      let sum = 0;
      for (let column = 0; column <= row; column++) sum += factor[row][column] * normal[column];
      shares[index] = Math.min(normalShareBelow(sum), 1 - 2 ** -53);
    });
  };
}

function inside(share: number): number {
  return Math.min(1 - 2 ** -53, Math.max(2 ** -53, share));
}

function matrixOf(names: string[], correlations: readonly Correlation[]): number[][] {
  const matrix: number[][] = names.map((_, i) => names.map((__, j) => Number(i === j)));
  for (const { of, with: other, coefficient } of correlations) {
    const [i, j] = [names.indexOf(of), names.indexOf(other)];
    matrix[i][j] = 2 * Math.sin((Math.PI / 6) * coefficient);
    matrix[j][i] = matrix[i][j];
  }
  return matrix;
}

/** The lower triangular L with L·Lᵀ = matrix (Cholesky); undefined where the matrix is not positive definite. */
function triangularFactor(matrix: number[][]): number[][] | undefined {
  const factor = matrix.map((row) => row.map(() => 0));
  for (let i = 0; i < matrix.length; i++) {
    for (let j = 0; j <= i; j++) {
      let sum = matrix[i][j];
      for (let k = 0; k < j; k++) sum -= factor[i][k] * factor[j][k];
      if (i === j && !(sum > 1e-12)) return undefined;
      factor[i][j] = i === j ? Math.sqrt(sum) : sum / factor[j][j];
    }
  }
  return factor;
}
