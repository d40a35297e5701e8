import { uniformFloat64 } from 'pure-rand/distribution/uniformFloat64';
import { xoroshiro128plus } from 'pure-rand/generator/xoroshiro128plus';
import type { RandomGenerator } from 'pure-rand/types/RandomGenerator';
import { cornerDescent } from './corner_descent.js';
import { evolve } from './evolution.js';
import type { MoveBox } from './parameter_space.js';
import type { Ranked, Trials } from './trials.js';

/** Points nearer to each other than this (greatest difference of a move) count as one place. */
const apart = 0.3;
const resolution = 5e-4;
const mostRounds = 60;
const lastRounds = 6;
const lastWidths = [0.2, 0.02];
const mostDoublings = 4;
const fewestTrials = 60;
/** Kept back for a last search around the worst that was found. */
const shareForLast = 0.25;

/**
 * Goes for the worst plant: over the corners from the worst known plant; then by local searches from the known plants that
 * are worse than all around them (Rinnooy Kan and Timmer 1987), the worst first, in turn with wide searches that have more
 * and more points a round (Auger and Hansen 2005).
 * @param known plants that were ranked before.
 * @param trials holds the budget, and afterwards the worst.
 */
export async function findWorst(
  known: readonly Ranked[],
  box: MoveBox,
  trials: Trials,
  seed: number,
): Promise<void> {
  const starts = worseThanAround(known);
  const size = box.least.length;
  if (starts.length === 0 || size === 0) return;
  const generator = xoroshiro128plus(seed);
  const corner = await cornerDescent(starts[0], box, trials);
  const usual = 4 + Math.floor(3 * Math.log(size));
  const reserve = Math.floor(trials.left * shareForLast);
  const search = (start: Float64Array, width: number, points: number, mostTrials: number) =>
    evolve({ start, width, points, resolution, mostTrials }, box, trials, generator);
  const queue = [corner, ...starts];
  const seen: Float64Array[] = [];
  let wide = 1;
  for (let round = 0; round < mostRounds && trials.left > reserve; round++) {
    const next = queue.find(({ move }) => !seen.some((one) => isNear(one, move)));
    const start = round % 3 === 2 ? undefined : next;
    const most = Math.min(trials.left - reserve, Math.max(fewestTrials, Math.ceil(trials.left / 2)));
    if (!start) wide = Math.min(mostDoublings, wide + 1);
    const found = start
      ? await search(start.move, 0.15, usual, most)
      : await search(drawnMove(box, generator), 0.5, usual * 2 ** wide, most);
    if (start) seen.push(start.move);
    if (found) seen.push(found.move);
  }
  for (let round = 0; round < lastRounds && !trials.spent && trials.worst; round++) {
    await search(trials.worst.move, lastWidths[round % lastWidths.length], usual, trials.left);
  }
}

/** The known plants that have no worse one near them, the worst first. */
function worseThanAround(known: readonly Ranked[]): Ranked[] {
  const sorted = known.filter(({ rank }) => Number.isFinite(rank)).sort((a, b) => a.rank - b.rank);
  const kept: Ranked[] = [];
  sorted.forEach((one, at) => {
    for (let i = 0; i < at; i++) if (isNear(sorted[i].move, one.move)) return;
    kept.push(one);
  });
  return kept;
}

function isNear(a: Float64Array, b: Float64Array): boolean {
  for (let k = 0; k < a.length; k++) if (Math.abs(a[k] - b[k]) > apart) return false;
  return true;
}

function drawnMove({ least, most }: MoveBox, generator: RandomGenerator): Float64Array {
  return Float64Array.from(least, (low, k) => low + (most[k] - low) * uniformFloat64(generator));
}
