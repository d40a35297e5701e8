import { EigenvalueDecomposition, Matrix } from 'ml-matrix';
import { uniformFloat64 } from 'pure-rand/distribution/uniformFloat64';
import type { RandomGenerator } from 'pure-rand/types/RandomGenerator';
import { normalQuantile } from './normal_distribution.js';
import type { MoveBox } from './parameter_space.js';
import type { Ranked, TrialBudget } from './trials.js';

/** Where a local search starts, how wide, with how many points a round, and when it has seen enough. */
export interface EvolutionOptions {
  start: Float64Array;
  /** Standard deviation of the first round, in moves. */
  width: number;
  /** Points in a round; the method's own number where not given. */
  points?: number;
  /** Ends when the width is below this. */
  resolution: number;
  mostTrials: number;
}

/**
 * Local search without derivatives by covariance matrix adaptation (CMA-ES; Hansen and Ostermeier 2001, with the settings of
 * Hansen 2016). It uses the order of the ranks alone, so that infinite ones and jumps do no harm. Points outside the box are
 * tried at the nearest point inside and put behind all others of equal rank by their distance.
 * @returns the worst that this search itself saw; undefined when the budget was spent before.
 */
export async function evolve(
  options: EvolutionOptions,
  box: MoveBox,
  trials: TrialBudget,
  generator: RandomGenerator,
): Promise<Ranked | undefined> {
  const state = new Evolution(options, generator);
  const last = trials.used + options.mostTrials;
  let worst: Ranked | undefined;
  let still = 0;
  while (!trials.spent && trials.used < last && state.width > options.resolution && still < state.patience) {
    const drawn = state.draw();
    const inside = drawn.map((point) => clipped(point, box));
    const before = trials.used;
    const ranks = await trials.ranks(inside);
    const order = orderOf(ranks, drawn, inside);
    const [first] = order;
    const better = worst === undefined || ranks[first] < worst.rank - 1e-9 * Math.abs(worst.rank);
    // A round that saw nothing new (all of it clipped to one corner, say) ends the search sooner.
    still = better ? 0 : still + (trials.used > before ? 1 : Math.ceil(state.patience / 4));
    if (worst === undefined || ranks[first] < worst.rank) worst = { move: inside[first], rank: ranks[first] };
    state.update(
      order.map((i) => drawn[i]),
      (mean) => clipped(mean, widened(box, state.width)),
    );
  }
  return worst;
}

function clipped(point: Float64Array, { least, most }: MoveBox): Float64Array {
  return point.map((x, k) => Math.min(most[k], Math.max(least[k], x)));
}

function widened({ least, most }: MoveBox, by: number): MoveBox {
  return { least: least.map((end) => end - by), most: most.map((end) => end + by) };
}

function orderOf(ranks: number[], drawn: Float64Array[], inside: Float64Array[]): number[] {
  const outside = drawn.map((point, i) => point.reduce((sum, x, k) => sum + (x - inside[i][k]) ** 2, 0));
  const compare = (a: number, b: number): number => (a === b ? 0 : a < b ? -1 : 1);
  return [...ranks.keys()].sort(
    (a, b) => compare(ranks[a], ranks[b]) || compare(outside[a], outside[b]) || a - b,
  );
}

/** Mean, width and shape of the normal distribution that is drawn from, and how each round changes them. */
class Evolution {
  width: number;
  /** Rounds without progress after which the search ends. */
  readonly patience: number;
  private readonly size: number;
  private readonly points: number;
  private readonly weights: number[];
  private readonly rates: Rates;
  private mean: Float64Array;
  private shape: Matrix;
  private axes: Matrix;
  private lengths: number[];
  private pathOfMean: Float64Array;
  private pathOfShape: Float64Array;
  private round = 0;

  constructor(
    options: EvolutionOptions,
    private readonly generator: RandomGenerator,
  ) {
    const n = options.start.length;
    this.size = n;
    this.points = options.points ?? 4 + Math.floor(3 * Math.log(n));
    this.patience = 10 + Math.ceil((30 * n) / this.points);
    const parents = Math.floor(this.points / 2);
    const raw = Array.from({ length: parents }, (_, i) => Math.log((this.points + 1) / 2) - Math.log(i + 1));
    const sum = raw.reduce((a, b) => a + b, 0);
    this.weights = raw.map((weight) => weight / sum);
    this.rates = ratesOf(n, this.weights);
    this.width = options.width;
    this.mean = options.start.slice();
    this.shape = Matrix.eye(n);
    this.axes = Matrix.eye(n);
    this.lengths = new Array<number>(n).fill(1);
    this.pathOfMean = new Float64Array(n);
    this.pathOfShape = new Float64Array(n);
  }

  draw(): Float64Array[] {
    return Array.from({ length: this.points }, () => {
      const normal = this.lengths.map((length) => length * normalQuantile(this.share()));
      return this.mean.map((x, i) => {
        let sum = 0;
        for (let j = 0; j < this.size; j++) sum += this.axes.get(i, j) * normal[j];
        return x + this.width * sum;
      });
    });
  }

  private share(): number {
    return uniformFloat64(this.generator) * (1 - 2 ** -52) + 2 ** -53;
  }

  /**
   * @param ordered the round's points, the worst plant first.
   * @param kept brings the mean back near the box: far outside it, nothing would draw it back.
   */
  update(ordered: Float64Array[], kept: (mean: Float64Array) => Float64Array): void {
    const { size: n, rates, width } = this;
    this.round++;
    const steps = this.weights.map((_, i) => ordered[i].map((x, k) => (x - this.mean[k]) / width));
    const step = Float64Array.from({ length: n }, (_, k) =>
      steps.reduce((sum, one, i) => sum + this.weights[i] * one[k], 0),
    );
    this.mean = kept(this.mean.map((x, k) => x + width * step[k]));
    const whitened = this.whitened(step);
    const { cs, damping, mass, cc, expected } = rates;
    this.pathOfMean = this.pathOfMean.map(
      (x, k) => (1 - cs) * x + Math.sqrt(cs * (2 - cs) * mass) * whitened[k],
    );
    const length = Math.hypot(...this.pathOfMean);
    const fading = Math.sqrt(1 - (1 - cs) ** (2 * this.round));
    const moving = length / fading < (1.4 + 2 / (n + 1)) * expected ? 1 : 0;
    this.pathOfShape = this.pathOfShape.map(
      (x, k) => (1 - cc) * x + moving * Math.sqrt(cc * (2 - cc) * mass) * step[k],
    );
    this.reshape(steps, moving);
    this.width *= Math.exp((cs / damping) * (length / expected - 1));
  }

  /** The step in units in which the distribution is round. */
  private whitened(step: Float64Array): Float64Array {
    const along = this.lengths.map((length, j) => {
      let sum = 0;
      for (let i = 0; i < this.size; i++) sum += this.axes.get(i, j) * step[i];
      return sum / length;
    });
    return step.map((_, i) => along.reduce((sum, x, j) => sum + this.axes.get(i, j) * x, 0));
  }

  private reshape(steps: Float64Array[], moving: number): void {
    const { c1, cmu, cc } = this.rates;
    const lost = moving === 1 ? 0 : c1 * cc * (2 - cc);
    for (let i = 0; i < this.size; i++) {
      for (let j = 0; j <= i; j++) {
        const spread = steps.reduce((sum, one, k) => sum + this.weights[k] * one[i] * one[j], 0);
        const value =
          (1 - c1 - cmu + lost) * this.shape.get(i, j) +
          c1 * this.pathOfShape[i] * this.pathOfShape[j] +
          cmu * spread;
        this.shape.set(i, j, value);
        this.shape.set(j, i, value);
      }
    }
    const decomposition = new EigenvalueDecomposition(this.shape, { assumeSymmetric: true });
    this.axes = decomposition.eigenvectorMatrix;
    this.lengths = decomposition.realEigenvalues.map((value) => Math.sqrt(Math.max(value, 1e-20)));
  }
}

interface Rates {
  mass: number;
  cs: number;
  damping: number;
  cc: number;
  c1: number;
  cmu: number;
  /** Expected length of a standard normal vector. */
  expected: number;
}

/** Learning rates by the number of parameters and the weights (Hansen 2016, table 1). */
function ratesOf(n: number, weights: readonly number[]): Rates {
  const mass = 1 / weights.reduce((sum, weight) => sum + weight * weight, 0);
  const cs = (mass + 2) / (n + mass + 5);
  const c1 = 2 / ((n + 1.3) ** 2 + mass);
  return {
    mass,
    cs,
    damping: 1 + 2 * Math.max(0, Math.sqrt((mass - 1) / (n + 1)) - 1) + cs,
    cc: (4 + mass / n) / (n + 4 + (2 * mass) / n),
    c1,
    cmu: Math.min(1 - c1, (2 * (mass - 2 + 1 / mass)) / ((n + 2) ** 2 + mass)),
    expected: Math.sqrt(n) * (1 - 1 / (4 * n) + 1 / (21 * n * n)),
  };
}
