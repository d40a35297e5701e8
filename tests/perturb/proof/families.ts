import { type LoopMargins, marginsOfLoop } from '../../../src/linear/margins.js';
import { fromRows } from '../../../src/linear/matrix.js';
import { polesOf } from '../../../src/linear/poles.js';
import { stateEquations } from '../../../src/linear/state_equations.js';
import { type ProofResult, proveOn } from '../../../src/perturb/proof/branch_and_bound.js';
import { allRootsLeft } from '../../../src/perturb/proof/half_plane.js';
import type { Interval } from '../../../src/perturb/proof/interval.js';
import { onHalfPlane } from '../../../src/perturb/proof/loop_polynomials.js';
import { type Slope, SlopeField } from '../../../src/perturb/proof/slope.js';

/** The roots of a polynomial with descending coefficients as eigenvalues of its companion matrix. */
export function rootsOf(descending: readonly number[]) {
  const n = descending.length - 1;
  const rows = Array.from({ length: n }, (_, i) =>
    Array.from({ length: n }, (__, j) =>
      i === 0 ? -descending[j + 1] / descending[0] : Number(i === j + 1),
    ),
  );
  return polesOf(fromRows(rows), undefined);
}

/** Proves that every polynomial of a family (descending coefficients over the box) is stable, or finds one that is not. */
export function proveStable(
  box: Interval[],
  coefficients: (field: SlopeField) => Slope[],
  domain: 'half plane' | 'circle',
  mostBoxes = 2000,
): ProofResult {
  const valuesAt = (point: readonly number[]): number[] => {
    const field = new SlopeField(point.map((x): Interval => [x, x]));
    return coefficients(field).map(({ centre }) => (centre[0] + centre[1]) / 2);
  };
  return proveOn(
    box,
    {
      holdsOn: (part) => {
        const field = new SlopeField(part);
        const ascending = [...coefficients(field)].reverse();
        const real = domain === 'circle' ? onHalfPlane(field, inDelta(field, ascending)) : ascending;
        return allRootsLeft(field, { real, imaginary: real.map(() => field.constant(0)) });
      },
      failsAt: (point) =>
        rootsOf(valuesAt(point)).some(({ real, imaginary }) =>
          domain === 'circle' ? Math.hypot(real, imaginary) >= 1 : real >= 0,
        ),
      cut: (part) =>
        part.reduce((best, [low, high], i) => (high - low > part[best][1] - part[best][0] ? i : best), 0),
    },
    mostBoxes,
  );
}

/** A polynomial in z as one in z − 1 (repeated synthetic division). */
function inDelta(field: SlopeField, ascending: Slope[]): Slope[] {
  const result = [...ascending];
  for (let first = 0; first < result.length; first++) {
    for (let k = result.length - 2; k >= first; k--) result[k] = field.add(result[k], result[k + 1]);
  }
  return result;
}

/** The margins of numerator/denominator in δ = z − 1 (ascending, of equal length, the denominator monic). */
export function marginsOf(numerator: readonly number[], denominator: readonly number[]): LoopMargins {
  const n = denominator.length - 1;
  const d = numerator[n];
  const a = Array.from({ length: n }, (_, i) =>
    Array.from({ length: n }, (__, j) =>
      i < n - 1 ? Number(j === i + 1) + Number(i === j) : -denominator[j] + Number(i === j),
    ),
  );
  const b = Array.from({ length: n }, (_, i) => [Number(i === n - 1)]);
  const c = [Array.from({ length: n }, (_, j) => numerator[j] - d * denominator[j])];
  return marginsOfLoop(stateEquations(fromRows(a), fromRows(b), fromRows(c), fromRows([[d]]), 1));
}
