import { LoopError } from '../../loop/loop.js';
import type { CoefficientValues } from '../../loop/parts.js';
import type { Spec } from '../../spec/spec.js';
import type { Watch } from '../crew.js';
import { judge } from '../judge.js';
import { PlantMeasurer } from '../plant_answers.js';
import type { LossShare } from '../run.js';
import { shapleyShares } from './shapley.js';

/** Lost headroom is shared out on these plants: the smallest headroom of any of them counts. */
export interface LossToShare {
  /** Place of the requirement in the spec. */
  requirement: number;
  /** The nominal plant, and the worst found with the latched and with today's coefficients; SI, in the order of the spec. */
  plants: readonly Float64Array[];
}

/** The shares of one loss, the largest first, or none where it cannot be shared out. */
export interface SharedLoss {
  attribution: LossShare[];
  sampledOrders: number | undefined;
}

/** Results without a number count as a headroom of this, and no headroom as less. */
const leastHeadroom = -10;
/** Smaller losses are of rounding, not of a coefficient. */
const leastLoss = 1e-9;

/** What losses are shared out over. */
export interface SharingTask {
  spec: Spec;
  latched: CoefficientValues;
  today: CoefficientValues;
  /** Names of the coefficients that differ. */
  changed: readonly string[];
  losses: readonly LossToShare[];
  /** Of the steps, as they were settled for all plants. */
  halvings: number;
}

/**
 * Shares out what each loss of headroom has to do with each changed coefficient: exact Shapley shares up to ten changes,
 * sampled beyond. An array is one coefficient.
 */
export async function shareLosses(task: SharingTask, watch: Watch = {}): Promise<SharedLoss[]> {
  const { spec, changed, losses } = task;
  const none = losses.map((): SharedLoss => ({ attribution: [], sampledOrders: undefined }));
  if (changed.length === 0 || losses.length === 0) return none;
  try {
    const worths = await worthsOf(task, watch);
    const { shares, sampledOrders } = shapleyShares(
      changed.length,
      (members) => worths.get(members.join())!,
      spec.perturbation.seed,
    );
    return losses.map((_, game) => ({
      attribution: rowsOf(
        changed,
        shares.map((row) => row[game]),
      ),
      sampledOrders,
    }));
  } catch (error) {
    // Some of the changes alone, such as a format without its numbers, make no loop.
    if (error instanceof LoopError) return none;
    throw error;
  }
}

/** What the changes of each coalition that is asked for lose in every game, worked out one by one, so that an interrupt is heard. */
async function worthsOf(task: SharingTask, { signal, done }: Watch): Promise<Map<string, number[]>> {
  const { spec, changed, losses } = task;
  const asked: (readonly boolean[])[] = [];
  const nothing = losses.map(() => 0);
  const ask = (members: readonly boolean[]): number[] => {
    asked.push(members);
    return nothing;
  };
  shapleyShares(changed.length, ask, spec.perturbation.seed);
  const worths = new Map<string, number[]>();
  for (const members of asked) {
    await new Promise((resolve) => setImmediate(resolve));
    signal?.throwIfAborted();
    worths.set(members.join(), worthOf(task, members));
    done?.(losses.reduce((sum, { plants }) => sum + plants.length, 0));
  }
  return worths;
}

/** The loss of each game with today's numbers of the members alone. */
function worthOf(
  { spec, latched, today, changed, losses, halvings }: SharingTask,
  members: readonly boolean[],
): number[] {
  const coefficients = new Map(latched);
  changed.forEach((name, at) => {
    if (members[at]) coefficients.set(name, today.get(name)!);
  });
  const measurer = new PlantMeasurer({ spec, coefficients });
  return losses.map((loss) => -headroomOf(spec, measurer, loss, halvings));
}

/** The smallest headroom on the plants, as a share of the limit. */
function headroomOf(
  spec: Spec,
  measurer: PlantMeasurer,
  { requirement, plants }: LossToShare,
  halvings: number,
): number {
  const answers = measurer.answers({ plants: [...plants], halvings, settle: false, wanted: [requirement] });
  const ranks = answers.map(({ results: [result] }) => judge(spec.requirements[requirement], result).rank);
  return Math.max(leastHeadroom, Math.min(1, ...ranks));
}

function rowsOf(changed: readonly string[], lost: readonly number[]): LossShare[] {
  const whole = lost.reduce((sum, one) => sum + one, 0);
  if (!(whole > leastLoss)) return [];
  return changed
    .map((name, at) => ({ name, lost: lost[at], share: lost[at] / whole }))
    .sort((a, b) => b.share - a.share || (a.name < b.name ? -1 : 1));
}
