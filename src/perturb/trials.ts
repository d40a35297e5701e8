/** Scores moves (see `ParameterSpace`) all at once: a smaller rank is worse, and below zero the requirement is broken. */
export type RankMoves = (moves: Float64Array[]) => Promise<number[]>;

/** A move and its rank. */
export interface Ranked {
  move: Float64Array;
  rank: number;
}

/** What a search needs of the trials it may make. */
export interface TrialBudget {
  readonly used: number;
  readonly spent: boolean;
  ranks(moves: readonly Float64Array[]): Promise<number[]>;
}

/**
 * Scores moves within a budget and remembers the worst. Moves that were scored before cost nothing; those beyond the budget
 * rank as infinitely good, so that every search ends by itself.
 */
export class Trials implements TrialBudget {
  used = 0;
  worst: Ranked | undefined;
  private readonly known = new Map<string, number>();

  constructor(
    private readonly rankMoves: RankMoves,
    private readonly budget: number,
    known: readonly Ranked[] = [],
  ) {
    for (const { move, rank } of known) {
      this.known.set(keyOf(move), rank);
      this.take(move, rank);
    }
  }

  get spent(): boolean {
    return this.used >= this.budget;
  }

  get left(): number {
    return Math.max(0, this.budget - this.used);
  }

  /** The ranks of the moves, in order. */
  async ranks(moves: readonly Float64Array[]): Promise<number[]> {
    const fresh = new Map<string, Float64Array>();
    for (const move of moves) {
      const key = keyOf(move);
      if (!this.known.has(key) && !fresh.has(key) && fresh.size < this.left) fresh.set(key, move);
    }
    this.used += fresh.size;
    const ranks = fresh.size > 0 ? await this.rankMoves([...fresh.values()]) : [];
    [...fresh].forEach(([key, move], i) => {
      this.known.set(key, ranks[i]);
      this.take(move, ranks[i]);
    });
    return moves.map((move) => this.known.get(keyOf(move)) ?? Number.POSITIVE_INFINITY);
  }

  /** The rank of one move. */
  async rank(move: Float64Array): Promise<number> {
    return (await this.ranks([move]))[0];
  }

  /**
   * The same budget for another question: points that stand for moves, scored by what follows from a move's rank.
   * @param moveOf the move that a point stands for.
   */
  scoredBy(
    moveOf: (point: Float64Array) => Float64Array,
    scoreOf: (point: Float64Array, rank: number) => number,
  ): TrialBudget {
    const trials = this;
    return {
      get used() {
        return trials.used;
      },
      get spent() {
        return trials.spent;
      },
      async ranks(points) {
        const ranks = await trials.ranks(points.map(moveOf));
        return ranks.map((rank, i) => scoreOf(points[i], rank));
      },
    };
  }

  private take(move: Float64Array, rank: number): void {
    if (!this.worst || rank < this.worst.rank) this.worst = { move: move.slice(), rank };
  }
}

function keyOf(move: Float64Array): string {
  return move.join();
}
