import { xoroshiro128plus } from 'pure-rand/generator/xoroshiro128plus';
import { evolve } from './evolution.js';
import type { MoveBox } from './parameter_space.js';
import { shrinkCounts } from './shrink_counts.js';
import type { Ranked, Trials } from './trials.js';

/** Steps into which the way to nominal is divided to find where on it the break begins. */
const steps = 1000;
/** Standard deviations of the local searches, the last of them for all further ones. */
const widths = [0.2, 0.02, 0.01];
/** Searching goes on while it makes the move shorter by this share. */
const leastGain = 1e-3;
const trialsPerParameter = 60;
/** Kept back of each parameter's trials for rounding. */
const trialsToRound = 4;
const seed = 17;

/**
 * The shortest move that still breaks when some parameters of a counterexample glide and the others stay. Fast-check shrinks
 * along the straight way to nominal; in turn with it a local search looks for a nearer point of an edge that is slanting or
 * curved, which no shrinking of one number after another finds.
 */
export async function nearestMove(
  start: Ranked,
  which: readonly number[],
  box: MoveBox,
  trials: Trials,
): Promise<Ranked> {
  if (which.length === 0) return start;
  const search = new LengthSearch(which, box, trials);
  let here = await search.alongRay(start);
  if (which.length === 1) return search.alongRay(here);
  for (let round = 0; trials.left > trialsToRound * which.length; round++) {
    const next = await search.alongRay(await search.around(here, widths[round] ?? widths[2]));
    const gain = 1 - search.length(next.move) / search.length(here.move);
    here = next;
    if (round > 0 && gain < leastGain) break;
  }
  return here;
}

/** More than the length of any move in the box, so that what holds ranks behind all that breaks. */
const farther = 1e3;

class LengthSearch {
  private readonly generator = xoroshiro128plus(seed);

  constructor(
    private readonly which: readonly number[],
    private readonly box: MoveBox,
    private readonly trials: Trials,
  ) {}

  /** Of the gliding parameters alone. */
  length(move: Float64Array): number {
    return Math.hypot(...this.part(move));
  }

  alongRay(start: Ranked): Promise<Ranked> {
    const at = ([count]: readonly number[]): Float64Array =>
      this.whole(
        start.move,
        this.part(start.move).map((x) => (x * count) / steps),
      );
    return shrinkCounts(start, [steps], at, this.trials);
  }

  /** A shorter one near by; the start itself where none is found. */
  async around(start: Ranked, width: number): Promise<Ranked> {
    const { which, box, trials } = this;
    const lengths = trials.scoredBy(
      (part) => this.whole(start.move, part),
      (part, rank) => (rank < 0 ? Math.hypot(...part) : farther + Math.min(rank, farther)),
    );
    const options = {
      start: Float64Array.from(this.part(start.move)),
      width,
      resolution: 1e-4,
      mostTrials: Math.min(trials.left - trialsToRound * which.length, trialsPerParameter * which.length),
    };
    const inner = { least: this.part(box.least), most: this.part(box.most) };
    const found = await evolve(options, inner, lengths, this.generator);
    if (!found || found.rank >= this.length(start.move)) return start;
    const move = this.whole(start.move, found.move);
    return { move, rank: await trials.rank(move) };
  }

  private part(move: ArrayLike<number>): number[] {
    return this.which.map((k) => move[k]);
  }

  private whole(move: Float64Array, part: ArrayLike<number>): Float64Array {
    const whole = move.slice();
    this.which.forEach((k, i) => {
      whole[k] = part[i];
    });
    return whole;
  }
}
