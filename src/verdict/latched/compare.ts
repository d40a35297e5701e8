import { LoopError } from '../../loop/loop.js';
import type { CoefficientValues } from '../../loop/parts.js';
import { measureNamed } from '../../measure/index.js';
import type { Requirement, Spec } from '../../spec/spec.js';
import type { Watch } from '../crew.js';
import type { JudgedSpec, JudgeOptions } from '../judge_spec.js';
import type { CoefficientChange, ComparedResult, Comparison, RequirementRun } from '../run.js';
import { type LossToShare, shareLosses } from './attribution.js';
import { isLike, withLatched } from './coefficient_changes.js';
import { plantValues, type Rerun, rerunLatched } from './like_with_like.js';
import type { LatchedResult, Reference } from './reference.js';
import { requirementChanges, specChanges } from './spec_parts.js';

/** What today's run is compared with. */
export interface ToCompare {
  spec: Spec;
  reference: Reference;
  today: CoefficientValues;
  judged: JudgedSpec;
  changes: readonly CoefficientChange[];
}

/**
 * Compares every requirement of today's run with the latched reference, like with like: the latched coefficients are run
 * again under today's spec, so that what the firmware changed and what the spec changed are told apart. A requirement that is
 * itself about the change has no comparison: its limit says what a change may be.
 */
export async function compareRequirements(
  task: ToCompare,
  options: JudgeOptions,
): Promise<(Comparison | undefined)[]> {
  const { spec, reference, today, changes, judged } = task;
  const latched = withLatched(today, reference, changes);
  const reruns = latched && (await rerunOrWhy(task, latched, options));
  const comparisons = judged.requirements.map((requirement, index): Comparison => {
    const now = todayOf(requirement);
    const rerun =
      reruns === undefined ? now : typeof reruns === 'string' ? undefined : reruns[index].compared;
    return {
      latched: latchedOf(reference, requirement),
      rerun,
      ...(typeof reruns === 'string' && { why: reruns }),
      today: now,
      lost: rerun && lostBetween(rerun, now),
      maySlip: spec.merge!.maySlip,
      fromSpec: [...requirementChanges(reference, spec.requirements[index]), ...specChanges(reference, spec)],
      attribution: [],
    };
  });
  const found =
    latched && Array.isArray(reruns)
      ? await attributed(task, latched, reruns, comparisons, options.watch)
      : comparisons;
  return found.map((comparison, index) => (isOfTheChange(spec.requirements[index]) ? undefined : comparison));
}

function isOfTheChange({ measure }: Requirement): boolean {
  return measureNamed(measure).description.againstLatched === true;
}

async function rerunOrWhy(
  { spec, judged }: ToCompare,
  latched: CoefficientValues,
  options: JudgeOptions,
): Promise<Rerun[] | string> {
  try {
    return await rerunLatched(spec, latched, judged, options);
  } catch (error) {
    if (error instanceof LoopError) return error.message;
    throw error;
  }
}

async function attributed(
  { spec, today, changes, judged }: ToCompare,
  latched: CoefficientValues,
  reruns: readonly Rerun[],
  comparisons: readonly Comparison[],
  watch: Watch | undefined,
): Promise<Comparison[]> {
  const changed = changes.filter((change) => isLike(change)).map(({ name }) => name);
  const losing = [...comparisons.keys()].filter(
    (index) => hasLost(comparisons[index]) && !isOfTheChange(spec.requirements[index]),
  );
  const losses = losing.map((index): LossToShare => {
    const { nominal, worst, holdsFor } = judged.requirements[index];
    const plants = holdsFor === 'nominal' ? [nominal] : [nominal, worst];
    const more = holdsFor === 'nominal' ? [] : [reruns[index].plant];
    return { requirement: index, plants: [...plants.map(plantValues), ...more] };
  });
  const { halvings } = judged;
  const shared = await shareLosses({ spec, latched, today, changed, losses, halvings }, watch);
  return comparisons.map((comparison, index) => {
    const at = losing.indexOf(index);
    if (at < 0) return comparison;
    const { attribution, sampledOrders } = shared[at];
    return { ...comparison, attribution, ...(sampledOrders !== undefined && { sampledOrders }) };
  });
}

/** Whether the firmware lost headroom, or its number altogether. */
export function hasLost({ rerun, today, lost }: Comparison): boolean {
  if (lost !== undefined) return lost > 0;
  return rerun?.headroom !== undefined && today.headroom === undefined;
}

/** Headroom is lost from the one to the other; a result without a number has none, and leaves the loss without one too. */
function lostBetween(rerun: ComparedResult, today: ComparedResult): number | undefined {
  if (rerun.headroom === undefined || today.headroom === undefined) return undefined;
  return rerun.headroom - today.headroom;
}

function todayOf({ holdsFor, nominal, worst }: RequirementRun): ComparedResult {
  const { result, headroom } = holdsFor === 'nominal' ? nominal : worst;
  return { result, headroom };
}

function latchedOf(reference: Reference, { name, holdsFor }: RequirementRun): ComparedResult | undefined {
  const found = Object.hasOwn(reference.requirements, name) ? reference.requirements[name] : undefined;
  return found && comparedOf(holdsFor === 'nominal' ? found.nominal : found.worst);
}

function comparedOf({ value, why, headroom }: LatchedResult): ComparedResult {
  return {
    result: value === null ? { kind: 'unformed', why: why ?? 'it had no value' } : { kind: 'value', value },
    headroom: headroom ?? undefined,
  };
}
