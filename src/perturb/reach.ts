import type { Trials } from './trials.js';

/**
 * How far the bounds may grow around nominal (above 1), or must shrink (below 1), before a break was found: all of them by
 * this factor, along the directions that were tried. A break may still lie nearer in a direction that was not tried.
 */
export interface Reach {
  factor: number;
  /** Whether a break was found at all; if not, `factor` is how far was looked. */
  found: boolean;
}

const growths = [1, 1.1, 1.25, 1.5, 2, 3];
const resolution = 1e-3;

/**
 * Looks for the first break along directions from nominal.
 * @param directions moves, of any length but zero; the worst plants give good ones.
 * @param trials scores moves, also beyond the bounds.
 */
export async function reachAlong(directions: readonly Float64Array[], trials: Trials): Promise<Reach> {
  const onFace = directions
    .map((move) => ({ move, size: Math.max(...move.map(Math.abs)) }))
    .filter(({ size }) => size > 0)
    .map(({ move, size }) => move.map((x) => x / size));
  const breaking = async (factor: number, of: Float64Array[]): Promise<Float64Array[]> => {
    const ranks = await trials.ranks(of.map((move) => move.map((x) => factor * x)));
    return of.filter((_, i) => ranks[i] < 0);
  };
  if ((await breaking(0, onFace.slice(0, 1))).length > 0) return { factor: 0, found: true };
  let holds = 0;
  for (const growth of growths) {
    const broken = await breaking(growth, onFace);
    if (broken.length > 0)
      return { factor: await between(holds, growth, broken, breaking, trials), found: true };
    if (trials.spent) break;
    holds = growth;
  }
  return { factor: holds, found: false };
}

/** The least factor at which a break was found, by bisection; directions that hold where others break are left out. */
async function between(
  low: number,
  high: number,
  directions: Float64Array[],
  breaking: (factor: number, of: Float64Array[]) => Promise<Float64Array[]>,
  trials: Trials,
): Promise<number> {
  let [holds, breaks, left] = [low, high, directions];
  while (breaks - holds > resolution * breaks && !trials.spent) {
    const middle = (holds + breaks) / 2;
    const broken = await breaking(middle, left);
    if (broken.length > 0) [breaks, left] = [middle, broken];
    else holds = middle;
  }
  return breaks;
}
