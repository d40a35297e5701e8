import type { MoveBox } from './parameter_space.js';
import type { Ranked, Trials } from './trials.js';

const mostRounds = 30;

/**
 * Goes from corner to worse corner: in each round every parameter alone is tried at its other ends; all moves that make it
 * worse are taken together where that is worse still, else the best of them.
 * @param least, most ends of each move.
 * @returns the corner (or the start, where no move makes it worse).
 */
export async function cornerDescent(
  start: Ranked,
  { least, most }: MoveBox,
  trials: Trials,
): Promise<Ranked> {
  let here = start;
  for (let round = 0; round < mostRounds && !trials.spent; round++) {
    const steps = [...here.move.keys()].flatMap((k) =>
      [least[k], most[k]].filter((end) => end !== here.move[k]).map((end) => ({ k, end })),
    );
    const moves = steps.map(({ k, end }) => here.move.with(k, end));
    const ranks = await trials.ranks(moves);
    const together = here.move.slice();
    for (const k of here.move.keys()) {
      const own = steps.flatMap((step, i) => (step.k === k ? [{ end: step.end, rank: ranks[i] }] : []));
      const best = own.reduce((a, b) => (b.rank < a.rank ? b : a));
      if (best.rank < here.rank) together[k] = best.end;
    }
    const all = await trials.rank(together);
    const single = ranks.reduce((best, rank, i) => (rank < ranks[best] ? i : best), 0);
    const next =
      all <= ranks[single] ? { move: together, rank: all } : { move: moves[single], rank: ranks[single] };
    if (!(next.rank < here.rank)) return here;
    here = next;
  }
  return here;
}
