import type { CoefficientValues } from '../loop/parts.js';
import type { ParameterSpace } from '../perturb/parameter_space.js';
import { LoopFamily } from '../perturb/proof/loop_family.js';
import type { LoopClaim } from '../perturb/proof/margin_statement.js';
import { proveClaim, provenStableAt, workAt } from '../perturb/proof/prove_claim.js';
import { Unprovable } from '../perturb/proof/slope_evaluation.js';
import type { Requirement, Spec } from '../spec/spec.js';
import type { Proof } from './run.js';

/** Boxes that a proof may look at: fewer where each costs more, by the products of quantities that one takes and their parameters. */
function budgetOf(products: number, parameters: number): number {
  return Math.max(20, Math.min(1000, Math.floor(2.5e6 / ((300 + products) * (parameters + 3)))));
}

/** A proof, with the plant that refutes it where there is one. */
export interface ProofFound {
  proof: Proof;
  counterexample: Float64Array | undefined;
}

/**
 * Tries to prove a requirement on a margin for every plant within the bounds.
 * @param breaks whether the requirement breaks on a plant.
 * @returns undefined for requirements for which there is no proof.
 */
export function proofOf(
  spec: Spec,
  coefficients: CoefficientValues,
  requirement: Requirement,
  space: ParameterSpace,
  breaks: (plant: Float64Array) => boolean,
): ProofFound | undefined {
  const claim = claimOf(requirement);
  if (!claim || space.size === 0) return undefined;
  const plantAt = (parameters: readonly number[]): Float64Array => {
    const values = space.nominal.slice();
    space.free.forEach((i, k) => {
      values[i] = parameters[k];
    });
    return space.completed(values);
  };
  const failsAt = (parameters: readonly number[]): boolean => {
    const plant = plantAt(parameters);
    return space.allows(plant) && breaks(plant);
  };
  try {
    return proveFamily(new LoopFamily(spec, coefficients, requirement, space), claim, {
      nominal: space.free.map((i) => space.nominal[i]),
      failsAt,
      plantAt,
    });
  } catch (error) {
    if (!(error instanceof Unprovable)) throw error;
    return { proof: { kind: 'open', boxes: 0, openShare: 1, why: error.message }, counterexample: undefined };
  }
}

interface PlantsOfBox {
  nominal: number[];
  failsAt: (parameters: readonly number[]) => boolean;
  plantAt: (parameters: readonly number[]) => Float64Array;
}

/** @throws {Unprovable} where a proof is not worth the try. */
function proveFamily(
  family: LoopFamily,
  claim: LoopClaim,
  { nominal, failsAt, plantAt }: PlantsOfBox,
): ProofFound {
  if (!provenStableAt(family, nominal)) {
    throw new Unprovable('rounding leaves the bounds too wide even for the nominal plant alone');
  }
  const budget = budgetOf(workAt(family, nominal), nominal.length);
  const result = proveClaim(family, claim, failsAt, budget);
  if (result.kind === 'refuted') {
    return { proof: { kind: 'refuted', boxes: result.boxes }, counterexample: plantAt(result.at) };
  }
  const why = `more is left than a budget of ${budget} boxes allows`;
  return { proof: result.kind === 'open' ? { ...result, why } : result, counterexample: undefined };
}

/** What must be proved of the loop for the requirement to hold; margins from below alone. */
function claimOf({ measure, limit }: Requirement): LoopClaim | undefined {
  if (!('at_least' in limit)) return undefined;
  const atLeast = limit.at_least;
  switch (measure) {
    case 'gain_margin':
      return atLeast > 1 ? { kind: measure, atLeast } : undefined;
    case 'phase_margin':
      return atLeast > 0 && atLeast < Math.PI ? { kind: measure, atLeast } : undefined;
    case 'modulus_margin':
      return atLeast > 0 && atLeast < 1 ? { kind: measure, atLeast } : undefined;
    default:
      return undefined;
  }
}
