import type { MeasureResult } from '../measure/measure.js';
import type { Requirement } from '../spec/spec.js';

/** A measure may change by less than this share of its limit when the steps are halved. */
const tolerance = 1e-4;
export const mostHalvings = 8;

/**
 * Halves the steps for one plant until no measure changes any more, from a first number of halvings on.
 * @returns the results at the finest steps used and the number of halvings that the coarser, confirmed one had; measures
 * which still change after eight halvings are unformed.
 */
export function settleSteps(
  requirements: readonly Requirement[],
  evaluate: (halvings: number) => MeasureResult[],
  first: number,
): { results: MeasureResult[]; halvings: number } {
  let coarse = evaluate(first);
  for (let halvings = first; halvings < mostHalvings; halvings++) {
    const fine = evaluate(halvings + 1);
    if (requirements.every((requirement, i) => unchanged(requirement, coarse[i], fine[i]))) {
      return { results: coarse, halvings };
    }
    coarse = fine;
  }
  const last = evaluate(mostHalvings + 1);
  const results = coarse.map((result, i) =>
    unchanged(requirements[i], result, last[i])
      ? result
      : ({
          kind: 'unformed',
          why: `the result still changes after ${mostHalvings} halvings of the step`,
        } as const),
  );
  return { results, halvings: mostHalvings };
}

function unchanged({ limit, scale }: Requirement, a: MeasureResult, b: MeasureResult): boolean {
  if (a.kind !== b.kind) return false;
  if (a.kind !== 'value' || b.kind !== 'value') return true;
  if (a.value === b.value) return true;
  return Math.abs(a.value - b.value) < tolerance * limitSize(limit, scale);
}

function limitSize(limit: Requirement['limit'], scale: number | undefined): number {
  if (scale !== undefined) return scale;
  if ('between' in limit) return Math.abs(limit.between[1] - limit.between[0]) / 2;
  return Math.abs('at_most' in limit ? limit.at_most : limit.at_least) || 1;
}
