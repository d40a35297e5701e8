import { xoroshiro128plus } from 'pure-rand/generator/xoroshiro128plus';
import { evolve } from './evolution.js';
import type { MoveBox } from './parameter_space.js';
import type { Ranked, Trials } from './trials.js';

/** Moves near to a given one of one parameter, the roundest first; for words that people can keep in mind. */
export type RounderMoves = (parameter: number, move: number) => number[];

/** The length of a move is settled to this share of itself. */
const resolution = 1e-3;
const seedOfNearest = 17;

/**
 * Brings a counterexample as near to nominal as it can be while it still breaks: first as few parameters moved as can be
 * (one after another is put back to nominal, the one that matters least first), then the shortest move of those that are
 * left (Euclidean, in shares of the way to the bounds), then round numbers.
 * @param broken counterexamples to begin with, at least one.
 * @returns a move that breaks; never farther from nominal than the one it began with, but for rounding.
 */
export async function shrink(
  broken: readonly Ranked[],
  box: MoveBox,
  rounder: RounderMoves,
  trials: Trials,
): Promise<Ranked> {
  const [start] = [...broken].sort((a, b) => moved(a).length - moved(b).length || a.rank - b.rank);
  const few = await putBack(start, trials);
  const scaled = await alongRay(few, trials);
  const nearest = await nearestOf(scaled, box, trials);
  return rounded(await alongRay(nearest, trials), rounder, trials);
}

function moved({ move }: Ranked): number[] {
  return [...move.keys()].filter((k) => move[k] !== 0);
}

/** Puts parameters back to nominal as long as it still breaks. */
async function putBack(start: Ranked, trials: Trials): Promise<Ranked> {
  let here = start;
  for (let left = moved(here).length; left > 0; left--) {
    const moves = moved(here).map((k) => here.move.with(k, 0));
    const ranks = await trials.ranks(moves);
    const best = ranks.reduce((a, rank, i) => (rank < ranks[a] ? i : a), 0);
    if (!(ranks[best] < 0)) return here;
    here = { move: moves[best], rank: ranks[best] };
  }
  return here;
}

/** Scales a move down as long as it still breaks (bisection; the end that breaks is kept). */
async function alongRay(start: Ranked, trials: Trials): Promise<Ranked> {
  let here = start;
  let [holds, breaks] = [0, 1];
  while (breaks - holds > resolution * breaks && !trials.spent) {
    const middle = (holds + breaks) / 2;
    const move = start.move.map((x) => middle * x);
    const rank = await trials.rank(move);
    if (rank < 0) {
      here = { move, rank };
      breaks = middle;
    } else holds = middle;
  }
  return here;
}

/** The shortest move of the same parameters that still breaks, by local search on the length. */
async function nearestOf(start: Ranked, box: MoveBox, trials: Trials): Promise<Ranked> {
  const which = moved(start);
  if (which.length < 2) return start;
  const whole = (part: Float64Array): Float64Array => {
    const move = new Float64Array(start.move.length);
    which.forEach((k, i) => {
      move[k] = part[i];
    });
    return move;
  };
  const lengths = trials.scoredBy(
    (part) => whole(part),
    (part, rank) => (rank < 0 ? Math.hypot(...part) : farther + Math.min(rank, farther)),
  );
  const options = {
    start: Float64Array.from(which, (k) => start.move[k]),
    width: 0.2,
    resolution,
    mostTrials: 60 * which.length,
  };
  const pick = (ends: readonly number[]): number[] => which.map((k) => ends[k]);
  const inner = { least: pick(box.least), most: pick(box.most) };
  const found = await evolve(options, inner, lengths, xoroshiro128plus(seedOfNearest));
  if (!found || !(found.rank < Math.hypot(...start.move))) return start;
  const move = whole(found.move);
  return { move, rank: await trials.rank(move) };
}

/** More than the length of any move in the box, so that what holds ranks behind all that breaks. */
const farther = 1e3;

/** Rounds one parameter after another, the one that moved most first, as long as it still breaks. */
async function rounded(start: Ranked, rounder: RounderMoves, trials: Trials): Promise<Ranked> {
  let here = start;
  const order = moved(start).sort((a, b) => Math.abs(start.move[b]) - Math.abs(start.move[a]));
  for (const k of order) {
    const moves = rounder(k, here.move[k]).map((x) => here.move.with(k, x));
    if (moves.length === 0) continue;
    const ranks = await trials.ranks(moves);
    const first = ranks.findIndex((rank) => rank < 0);
    if (first >= 0) here = { move: moves[first], rank: ranks[first] };
  }
  return here;
}
