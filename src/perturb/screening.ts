import { uniformInt } from 'pure-rand/distribution/uniformInt';
import { xoroshiro128plus } from 'pure-rand/generator/xoroshiro128plus';
import type { MoveBox } from './parameter_space.js';

/** How much a parameter matters: the mean size of the change when it goes from one bound to the other. */
export interface Effect {
  parameter: number;
  /** Mean size of the effect, in the unit of what was scored. */
  size: number;
  /** Standard deviation of the effect: large where it depends on the other parameters. */
  spread: number;
}

const levels = 4;
/** The step of Morris between levels that are equally likely: levels/(2·(levels − 1)) of the range. */
const step = levels / (2 * (levels - 1));

/**
 * Walks through the box that change one parameter at a time by two thirds of its range, each parameter once in every walk
 * (Morris 1991).
 * @returns the moves of all walks in order, `size + 1` for each.
 */
export function screeningWalks({ least, most }: MoveBox, walks: number, seed: number): Float64Array[] {
  const size = least.length;
  const generator = xoroshiro128plus(seed ^ 0x1f123bb5);
  return Array.from({ length: walks }, () => {
    const shares = least.map(() => uniformInt(generator, 0, levels / 2 - 1) / (levels - 1));
    const upward = least.map(() => uniformInt(generator, 0, 1) === 1);
    const order = shuffled(size, (below) => uniformInt(generator, 0, below));
    const points = [shares.map((share, k) => (upward[k] ? share : share + step))];
    for (const k of order) {
      const last = points[points.length - 1];
      points.push(last.with(k, last[k] + (upward[k] ? step : -step)));
    }
    return points.map((point) =>
      Float64Array.from(point, (share, k) => least[k] + share * (most[k] - least[k])),
    );
  }).flat();
}

function shuffled(size: number, upTo: (below: number) => number): number[] {
  const order = Array.from({ length: size }, (_, k) => k);
  for (let last = size - 1; last > 0; last--) {
    const other = upTo(last);
    [order[last], order[other]] = [order[other], order[last]];
  }
  return order;
}

/**
 * The effects of the parameters, the greatest mean size first (Morris 1991; the mean of sizes by Campolongo, Cariboni and
 * Saltelli 2007), each extended to the whole range.
 * @param scores of the walks' moves; steps with a score that is not finite are left out.
 */
export function effectsOf(moves: readonly Float64Array[], scores: readonly number[], size: number): Effect[] {
  const changes: number[][] = Array.from({ length: size }, () => []);
  for (let at = 0; at + 1 < moves.length; at++) {
    if (at % (size + 1) === size) continue;
    const k = moves[at].findIndex((x, i) => x !== moves[at + 1][i]);
    const direction = Math.sign(moves[at + 1][k] - moves[at][k]);
    const change = ((scores[at + 1] - scores[at]) * direction) / step;
    if (Number.isFinite(change)) changes[k].push(change);
  }
  return changes
    .map((all, parameter) => {
      const mean = average(all);
      const spread = Math.sqrt(average(all.map((change) => (change - mean) ** 2)));
      return { parameter, size: average(all.map(Math.abs)), spread };
    })
    .sort((a, b) => b.size - a.size || a.parameter - b.parameter);
}

function average(values: readonly number[]): number {
  return values.length === 0 ? 0 : values.reduce((sum, value) => sum + value, 0) / values.length;
}
