import { Matrix, solve } from 'ml-matrix';

/** What a steady observer gain follows from; matrices row by row. */
export interface NoisyModel {
  /** A and C of x' = A·x + w, y = C·x + v. */
  state: number[][];
  output: number[][];
  /** Covariances of w and v. */
  disturbed: number[][];
  noise: number[][];
  uses: 'this_sample' | 'last_sample';
}

/** A gain, or why there is none. */
export type SteadyGain = { kind: 'gain'; gain: number[][] } | { kind: 'none'; why: string };

const mostRounds = 60;
const smallest = 1e-14;
const largestResidual = 1e-9;

/**
 * The gain with the least variance of the estimates once the start is forgotten (Kalman 1960):
 * L = P·Cᵀ·(C·P·Cᵀ + R)⁻¹ with this_sample and A·L with last_sample, where P solves the discrete Riccati equation
 * P = A·P·Aᵀ − A·P·Cᵀ·(C·P·Cᵀ + R)⁻¹·C·P·Aᵀ + Q. Doubling: each round covers twice as many instants (Anderson 1978,
 * 'Second-order convergent algorithms for the steady-state Riccati equation', from memory).
 */
export function steadyGain(model: NoisyModel): SteadyGain {
  const [a, c, q, r] = [model.state, model.output, model.disturbed, model.noise].map(
    (rows) => new Matrix(rows),
  );
  const fault = covarianceFault(q, 'process_covariance') ?? covarianceFault(r, 'measurement_covariance');
  if (fault) return { kind: 'none', why: fault };
  try {
    return gainOf(a, c, q, r, model.uses);
  } catch (error) {
    return {
      kind: 'none',
      why: `the measurement_covariance cannot be inverted (${(error as Error).message})`,
    };
  }
}

function gainOf(a: Matrix, c: Matrix, q: Matrix, r: Matrix, uses: NoisyModel['uses']): SteadyGain {
  const p = doubled(a.transpose(), c.transpose().mmul(solve(r, c)), q);
  if (!p) {
    return {
      kind: 'none',
      why: `the variance did not settle in ${mostRounds} doublings: a state that does not die out must be seen by what is measured, and be disturbed`,
    };
  }
  const innovation = Matrix.add(c.mmul(p).mmul(c.transpose()), r);
  const gain = solve(innovation, c.mmul(p)).transpose();
  const residual = Matrix.sub(Matrix.add(moved(a, Matrix.sub(p, gain.mmul(c).mmul(p))), q), p);
  const share = residual.norm('frobenius') / p.norm('frobenius');
  if (p.norm('frobenius') > 0 && !(share <= largestResidual)) {
    return {
      kind: 'none',
      why: `the Riccati equation is left with a residual of ${share.toExponential(2)} of its solution`,
    };
  }
  return { kind: 'gain', gain: (uses === 'this_sample' ? gain : a.mmul(gain)).to2DArray() };
}

function moved(a: Matrix, p: Matrix): Matrix {
  return a.mmul(p).mmul(a.transpose());
}

/** The solution of X = aᵀ·X·(I + g·X)⁻¹·a + h, or undefined where it does not settle. */
function doubled(start: Matrix, startG: Matrix, startH: Matrix): Matrix | undefined {
  let [a, g, h] = [start, startG, startH];
  for (let round = 0; round < mostRounds; round++) {
    const middle = Matrix.add(Matrix.eye(a.rows), g.mmul(h));
    const [through, reached] = [solve(middle, a), solve(middle, g)];
    const gain = a.transpose().mmul(h).mmul(through);
    [a, g, h] = [a.mmul(through), Matrix.add(g, a.mmul(reached).mmul(a.transpose())), Matrix.add(h, gain)];
    const size = h.norm('frobenius');
    if (!Number.isFinite(size)) return undefined;
    if (gain.norm('frobenius') <= smallest * size && a.norm('frobenius') < 1) return symmetric(h);
  }
  return undefined;
}

function symmetric(h: Matrix): Matrix {
  return Matrix.mul(Matrix.add(h, h.transpose()), 0.5);
}

function covarianceFault(of: Matrix, name: string): string | undefined {
  const rows = of.to2DArray();
  const size = Math.max(...rows.flat().map(Math.abs));
  const uneven = rows.some((row, i) => row.some((entry, j) => Math.abs(entry - rows[j][i]) > 1e-9 * size));
  if (uneven) return `the ${name} is not symmetric`;
  const negative = rows.findIndex((row, i) => row[i] < 0);
  return negative < 0
    ? undefined
    : `the ${name} has the variance ${rows[negative][negative]} in row ${negative + 1}; expected at least 0`;
}
