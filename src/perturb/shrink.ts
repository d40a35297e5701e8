import { nearestMove } from './nearest_move.js';
import type { ListedMoves, MoveBox } from './parameter_space.js';
import { shrinkCounts } from './shrink_counts.js';
import type { Ranked, Trials } from './trials.js';

/** Moves near to a given one of one parameter, the roundest first; for words that people can keep in mind. */
export type RounderMoves = (parameter: number, move: number) => number[];

/**
 * Brings a counterexample as near to nominal as it can be while it still breaks: first as few parameters moved as can be (one
 * after another is put back to nominal, the one that matters least first; of a list to the value nearest to nominal), then the
 * shortest move of those that are left (Euclidean, in shares of the way to the bounds), then round numbers.
 * @param broken counterexamples to begin with, at least one.
 * @returns a move that breaks; never farther from nominal than the one it began with, but for rounding.
 */
export async function shrink(
  broken: readonly Ranked[],
  box: MoveBox & ListedMoves,
  rounder: RounderMoves,
  trials: Trials,
): Promise<Ranked> {
  const [start] = [...broken].sort((a, b) => moved(a).length - moved(b).length || a.rank - b.rank);
  const few = await putBack(start, box, trials);
  const gliding = moved(few).filter((k) => !box.listed[k]);
  const nearest = await nearestMove(few, gliding, box, trials);
  return rounded(nearest, gliding, rounder, trials);
}

function moved({ move }: Ranked): number[] {
  return [...move.keys()].filter((k) => move[k] !== 0);
}

/** Puts parameters back to nominal, or to a listed value nearer to it. */
async function putBack(start: Ranked, { listed }: ListedMoves, trials: Trials): Promise<Ranked> {
  const which = moved(start);
  const alone = await trials.ranks(which.map((k) => start.move.with(k, 0)));
  const order = [...which.keys()].sort((a, b) => alone[a] - alone[b] || a - b).map((i) => which[i]);
  const nearer = (k: number): number[] => {
    const { [k]: own } = start.move;
    const between = (listed[k] ?? []).filter((one) => one * own > 0 && Math.abs(one) < Math.abs(own));
    return [0, ...between.sort((a, b) => Math.abs(a) - Math.abs(b))];
  };
  return firstChoices(start, order, nearer, trials);
}

/** Rounds the moves of some parameters, the one that moved most first. */
function rounded(
  start: Ranked,
  which: readonly number[],
  rounder: RounderMoves,
  trials: Trials,
): Promise<Ranked> {
  const order = [...which].sort((a, b) => Math.abs(start.move[b]) - Math.abs(start.move[a]));
  return firstChoices(start, order, (k) => rounder(k, start.move[k]), trials);
}

/** Takes for one parameter after another a move as early among its choices as still breaks. */
async function firstChoices(
  start: Ranked,
  which: readonly number[],
  choicesOf: (parameter: number) => number[],
  trials: Trials,
): Promise<Ranked> {
  const choices = which.map((k) => [...choicesOf(k), start.move[k]]);
  const last = choices.map((all) => all.length - 1);
  const moveAt = (counts: readonly number[]): Float64Array => {
    const move = start.move.slice();
    which.forEach((k, i) => {
      move[k] = choices[i][counts[i]];
    });
    return move;
  };
  return shrinkCounts(start, last, moveAt, trials);
}
