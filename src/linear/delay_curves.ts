import type { Complex } from './complex.js';
import { applied, oneLess, product, realForm, scaled, sum, wave } from './complex_matrix.js';
import { determinantOf } from './determinant.js';
import type { LocusPoint } from './gain_loci.js';
import {
  add,
  euclideanNorm,
  fromRows,
  identity,
  type Matrix,
  multiply,
  place,
  scale,
  zeros,
} from './matrix.js';
import { NumericFailure } from './numeric_failure.js';
import { prepareResponseMatrix } from './response.js';
import { rootBetween } from './root_finding.js';
import { solve } from './solve.js';
import type { StateEquations } from './state_equations.js';

/**
 * A place on a curve, as plain numbers: the direction y of the changes in a cycle (real and imaginary parts), then the angle
 * by which the eigenvalue of L·X is ahead of −1 (rad), the frequency times the period of the cycle, and the
 * delay over the time between two changes.
 */
type Place = Float64Array;

const stepsAtLeast = 400;
const stepsForChange = 20;
const shortestStep = 1e-6;
const longestStep = 0.5;
const mostRounds = 12;
const mostCycles = 1e6;
const fullTurn = 2 * Math.PI;
/** Where to look for a change of sign within one change of the signal. */
const partsOfChange = 16;

/**
 * The curves in the plane of frequency and delay on which an eigenvalue of L·X is of size one, L being lifted and X the turn
 * that a delay makes (see `smallestDelay`). L·X·y = −e^{jψ}·y is e^{jψ}·S·y + (I − S)·X·y = 0, so that poles of L do no harm. A
 * curve is followed by its length, so that it may turn back in any of its numbers (Keller, 1977).
 */
export class DelayCurves {
  private readonly response: (frequency: number) => Complex[][];
  /** Of each signal in a cycle. */
  private readonly changes: number;
  /** Of all signals. */
  private readonly size: number;
  private readonly period: number;
  /** Time between two changes, s. */
  private readonly spacing: number;

  /** @param signals how many there are, which change equally often and one after the other. */
  constructor(
    sensitivity: StateEquations,
    private readonly signals: number,
  ) {
    this.response = prepareResponseMatrix(sensitivity);
    this.size = sensitivity.b.columns;
    this.changes = this.size / signals;
    this.period = sensitivity.period!;
    this.spacing = this.period / this.changes;
  }

  /**
   * The smallest delay at which the loop keeps a motion that is the same, or its negative, after a cycle; Infinity where there is
   * none. Half the sampling frequency is among these frequencies. After two cycles all is as it was.
   */
  atRealFrequencies(): number {
    return Math.min(this.atRealFrequency(0), this.atRealFrequency(Math.PI / this.period));
  }

  private atRealFrequency(frequency: number): number {
    const real = (matrix: readonly (readonly Complex[])[]): Matrix =>
      fromRows(matrix.map((row) => row.map((entry) => entry.real)));
    const sensitivity = real(this.response(frequency));
    const complementary = add(identity(this.size), sensitivity, -1);
    // Real, but for half the sampling frequency, where the imaginary part is the way from one sense of turning to the other.
    const determinant = (delay: number): number =>
      determinantOf(add(sensitivity, multiply(complementary, real(this.turn(frequency, delay, once)))));
    const step = this.spacing / partsOfChange;
    let before = determinant(0);
    for (let k = 1; k <= 2 * this.changes * partsOfChange; k++) {
      const here = determinant(k * step);
      if (before * here <= 0) return rootBetween(determinant, (k - 1) * step, k * step);
      before = here;
    }
    return Number.POSITIVE_INFINITY;
  }

  /**
   * The smallest delay in s at which the curve from a place over one cycle, or the same whole cycles later, is at the edge;
   * Infinity where it turns back before. A delay of a cycle turns all that is the same at its ends alike, so that
   * X(θ, τ + KT) = X(θ, τ)·e^{−jθKT}: the curves of one cycle are those of every other one, but for this turn.
   * @param place where an eigenvalue of the loop, delayed by `changes` whole changes (a cycle at most), is of size one.
   * @param way whether the curve is followed to more delay or to less.
   * @param known a delay beyond which nothing is looked for.
   * @throws NumericFailure where it cannot be followed.
   */
  firstEdge({ frequency, value }: LocusPoint, changes: number, way: 1 | -1, known: number): number {
    const places = this.overOneCycle(this.startAt(frequency, value, changes), way);
    const at = places[0].length - 3;
    const cycles = Math.min(mostCycles, Math.floor(known / this.period) + 1);
    // A place that was delayed before the curve begins belongs to the cycle before too.
    for (let cycle = changes > 0 ? -1 : 0; cycle < cycles; cycle++) {
      let least = Number.POSITIVE_INFINITY;
      for (let k = 1; k < places.length; k++) {
        const [from, to] = [places[k - 1], places[k]].map((place) => this.late(place, cycle));
        if (from[at + 2] < 0 || to[at + 2] < 0) continue;
        const [before, after] = [from[at], to[at]].map((angle) => Math.floor(angle / fullTurn));
        if (before === after) continue;
        least = Math.min(least, this.edgeBetween(from, to, fullTurn * Math.max(before, after)));
      }
      if (least < Number.POSITIVE_INFINITY) return least;
    }
    return Number.POSITIVE_INFINITY;
  }

  /** The same place so many cycles later. */
  private late(place: Place, cycles: number): Place {
    const later = place.slice();
    const at = place.length - 3;
    later[at] -= cycles * place[at + 1];
    later[at + 2] += cycles * this.changes;
    return later;
  }

  /**
   * Places along the curve up to a delay of one cycle more or less, each near to the one before. A curve that comes back into
   * itself is given up after a while.
   */
  private overOneCycle(start: Place, way: 1 | -1): Place[] {
    const delayed = start.length - 1;
    const places = [start];
    let along = this.tangent(
      start,
      unitVector(start.length, delayed).map((x) => way * x),
    );
    let step = longestStep;
    for (let count = 0; along; count++) {
      if (count > stepsAtLeast + stepsForChange * this.changes) return places;
      const here = places[places.length - 1];
      const next = this.stepFrom(here, along, step);
      const onwards = next && this.tangent(next, along);
      if (!next || !onwards || dot(onwards, along) < 0.9) {
        step /= 2;
        if (step < shortestStep) break;
        continue;
      }
      const gone = way * (next[delayed] - start[delayed]);
      if (gone < 0 || !this.isInside(next)) return places;
      places.push(next);
      if (gone >= this.changes) return places;
      [along, step] = [onwards, Math.min(longestStep, 2 * step)];
    }
    throw new NumericFailure(
      `the delay that brings the loop to the edge of stability was not found: from ${start[delayed - 1] / this.period} rad/s on it was followed to ${places[places.length - 1][delayed] * this.spacing} s`,
    );
  }

  /** Whether no frequency of the cycle is beyond half the sampling frequency, where the turn jumps. */
  private isInside(here: Place): boolean {
    const frequency = here[here.length - 2];
    return this.changes % 2 === 0
      ? frequency >= 0 && frequency <= 2 * Math.PI
      : Math.abs(frequency) <= Math.PI;
  }

  private startAt(frequency: number, value: Complex, delay: number): Place {
    const y = this.eigenvector(frequency, value, delay);
    const angle = Math.atan2(-value.imaginary, -value.real);
    return Float64Array.of(...y.data, angle, frequency * this.period, delay);
  }

  private stepFrom(here: Place, along: Place, step: number): Place | undefined {
    const expected = here.map((x, i) => x + step * along[i]);
    const found = this.corrected(expected, here, along);
    if (!found) return undefined;
    const off = Math.hypot(...found.map((x, i) => x - expected[i]));
    return off < 0.3 * step ? normalised(found) : undefined;
  }

  /** The delay in s between two places where the angle has a value. */
  private edgeBetween(from: Place, to: Place, angle: number): number {
    const at = from.length - 3;
    const share = (angle - from[at]) / (to[at] - from[at]);
    const guess = from.map((x, i) => x + share * (to[i] - x));
    guess[at] = angle;
    const found = this.corrected(guess, from, unitVector(from.length, at));
    if (found) return found[at + 2] * this.spacing;
    throw new NumericFailure(
      `the delay that brings the loop to the edge of stability was not found between ${from[at + 2] * this.spacing} s and ${to[at + 2] * this.spacing} s`,
    );
  }

  /** The place on the curve next to another, kept in one direction, by Newton's method; undefined where it does not settle. */
  private corrected(guess: Place, from: Place, kept: Place): Place | undefined {
    let here = guess;
    let before = Number.POSITIVE_INFINITY;
    for (let round = 0; round < mostRounds; round++) {
      const rows = this.rowsAt(here, from, kept);
      const right = zeros(here.length, 1);
      right.data.set(rows.residual.map((x) => -x));
      const move = solved(rows.matrix, right);
      if (!move?.every(Number.isFinite)) return undefined;
      here = here.map((x, i) => x + move[i]);
      const moved = Math.hypot(...move) / Math.hypot(...here);
      // Below this a step that is no shorter than the last is rounding.
      if (moved < settled || (moved < nearlySettled && moved >= 0.5 * before)) return here;
      before = moved;
    }
    return undefined;
  }

  /** The direction of length one of the curve, on the same side as another. */
  private tangent(here: Place, along: Place): Place | undefined {
    const right = zeros(here.length, 1);
    right.data[here.length - 1] = 1;
    const found = solved(this.rowsAt(here, here, along).matrix, right);
    return found && normalisedTo(found, 1);
  }

  /**
   * Newton's equations: the 2K of the curve, two that keep yᴴ·y₀ as it is, and one that keeps to `kept`.
   */
  private rowsAt(here: Place, from: Place, kept: Place): { matrix: Matrix; residual: Float64Array } {
    const size = here.length;
    const n = this.size;
    const [ahead, frequency, delay] = this.numbersOf(here);
    const y = complexOf(here, n);
    const s = this.response(frequency);
    const turned = oneLess(s, this.turn(frequency, delay, once));
    const forward = wave(ahead);
    const m = s.map((row, i) => row.map((entry, j) => sum(product(forward, entry), turned[i][j])));
    const seen = applied(s, y).map((z) => product(forward, z));
    const late = this.turn(frequency, delay, (omega) => ({ real: 0, imaginary: -omega * this.spacing }));
    const columns = [
      seen.map(({ real, imaginary }) => ({ real: -imaginary, imaginary: real })),
      this.byFrequency(here, y),
      applied(oneLess(s, late), y),
    ];
    const matrix = zeros(size, size);
    place(matrix, realForm(m), 0, 0);
    columns.forEach((column, k) => {
      column.forEach(({ real, imaginary }, i) => {
        matrix.data[2 * i * size + 2 * n + k] = real;
        matrix.data[(2 * i + 1) * size + 2 * n + k] = imaginary;
      });
    });
    const conjugates = complexOf(from, n).map(({ real, imaginary }) => ({ real, imaginary: -imaginary }));
    place(matrix, realForm([conjugates]), 2 * n, 0);
    matrix.data.set(kept, (size - 1) * size);
    const residual = new Float64Array(size);
    applied(m, y).forEach(({ real, imaginary }, i) => {
      residual[2 * i] = real;
      residual[2 * i + 1] = imaginary;
    });
    const [along] = applied([conjugates], y);
    residual[2 * n] = along.real - 1;
    residual[2 * n + 1] = along.imaginary;
    return { matrix, residual };
  }

  /** Derivative of the equations by the scaled frequency, by a central difference: it only steers. */
  private byFrequency(here: Place, y: readonly Complex[]): Complex[] {
    const [ahead, frequency, delay] = this.numbersOf(here);
    const h = 1e-6 * Math.max(Math.abs(frequency), 1e-6 / this.period);
    const [after, before] = [frequency + h, frequency - h].map((omega) => {
      const s = this.response(omega);
      const turned = oneLess(s, this.turn(omega, delay, once));
      const seen = applied(s, y).map((z) => product(wave(ahead), z));
      return applied(turned, y).map((z, i) => sum(z, seen[i]));
    });
    return after.map((z, i) => scaled(sum(z, scaled(before[i], -1)), 1 / (2 * h * this.period)));
  }

  private numbersOf(here: Place): [number, number, number] {
    const n = 2 * this.size;
    return [here[n], here[n + 1] / this.period, here[n + 2] * this.spacing];
  }

  /**
   * X, each of its sines weighed: entry (i, k) of a signal is the mean over them of weight(ω)·e^{jω((i − k)T − τ)}, and it has
   * none from one signal to another.
   */
  private turn(frequency: number, delay: number, weight: (omega: number) => Complex): Complex[][] {
    const n = this.changes;
    const cycle = (2 * Math.PI) / this.period;
    const omegas = Array.from({ length: n }, (_, m) => frequency + (m - Math.floor(n / 2)) * cycle);
    const byShift = Array.from({ length: 2 * n - 1 }, (_, at) =>
      omegas
        .map((omega) => {
          const late = ((at - (n - 1)) * this.period) / n - delay;
          return scaled(product(weight(omega), wave(omega * late)), 1 / n);
        })
        .reduce(sum),
    );
    const nothing = { real: 0, imaginary: 0 };
    const { signals } = this;
    return Array.from({ length: this.size }, (_, row) =>
      Array.from({ length: this.size }, (_, column) =>
        (row - column) % signals === 0 ? byShift[(row - column) / signals + n - 1] : nothing,
      ),
    );
  }

  /** Of length one, for an eigenvalue λ of L·X: λ·S·y = (I − S)·X·y; by inverse iteration (Wielandt, 1944). */
  private eigenvector(frequency: number, value: Complex, delay: number): Matrix {
    const s = this.response(frequency);
    const turned = oneLess(s, this.turn(frequency, delay * this.spacing, once));
    // Beside the eigenvalue itself, where the matrix would be singular.
    const beside = { real: -value.real + 1e-13, imaginary: -value.imaginary };
    const shifted = s.map((row, i) => row.map((entry, j) => sum(turned[i][j], product(entry, beside))));
    const matrix = realForm(shifted);
    let x = zeros(2 * this.size, 1);
    // Entries without a pattern, so that no eigenvector lies across.
    for (let i = 0; i < x.rows; i++) x.data[i] = 1 + ((i * 0.6180339887498949) % 1);
    for (let round = 0; round < 3; round++) {
      x = solve(matrix, x);
      x = scale(x, 1 / euclideanNorm(x.data));
    }
    return x;
  }
}

/** The weight of every sine in X itself. */
const once = (): Complex => ({ real: 1, imaginary: 0 });

/** A place is found when Newton's method moves it by less than this share. */
const settled = 1e-13;
const nearlySettled = 1e-9;

function solved(matrix: Matrix, right: Matrix): Float64Array | undefined {
  try {
    return solve(matrix, right).data;
  } catch (error) {
    if (error instanceof NumericFailure) return undefined;
    throw error;
  }
}

function complexOf(here: Place, n: number): Complex[] {
  return Array.from({ length: n }, (_, i) => ({ real: here[2 * i], imaginary: here[2 * i + 1] }));
}

/** The direction made one long. */
function normalised(here: Place): Place {
  const length = Math.hypot(...here.subarray(0, here.length - 3));
  return here.map((x, i) => (i < here.length - 3 ? x / length : x));
}

function normalisedTo(vector: Float64Array, length: number): Float64Array {
  const factor = length / Math.hypot(...vector);
  return vector.map((x) => factor * x);
}

function unitVector(size: number, at: number): Float64Array {
  const vector = new Float64Array(size);
  vector[at] = 1;
  return vector;
}

function dot(a: Float64Array, b: Float64Array): number {
  return a.reduce((total, x, i) => total + x * b[i], 0);
}
