import type { Complex } from './complex.js';
import { complexEigenvalues } from './complex_eigenvalues.js';
import { frequencyGrid } from './frequency_grid.js';
import { prepareResponseMatrix } from './response.js';
import type { StateEquations } from './state_equations.js';

/** The eigenvalues of a lifted loop transfer at one frequency (rad/s). */
interface Spectrum {
  frequency: number;
  values: Complex[];
}

/** One eigenvalue at one frequency (rad/s). */
export interface LocusPoint {
  frequency: number;
  value: Complex;
}

/** One eigenvalue at two neighbouring frequencies. */
export interface LocusStep {
  from: LocusPoint;
  to: LocusPoint;
}

/** Neighbouring values of a locus differ by less than this share of their size, or are as near as the depth allows. */
const farthest = 0.2;
/** A locus is only taken to go on in a value that is nearer than the others by this factor. */
const plainly = 2;
/** Values that are as near as this are one, as of two loops that are the same. */
const coinciding = 1e-9;
const mostHalvings = 12;
/** A zero is found to this share of its frequency, or in so many rounds. */
const narrowest = 1e-12;
const mostRounds = 100;

/**
 * The loci of the eigenvalues of a sampled loop transfer L with several inputs and outputs over all frequencies, in short
 * steps (characteristic loci; MacFarlane and Postlethwaite, 1977). They are taken from S = (I + L)⁻¹, which is finite at
 * every frequency where L may have a pole: an eigenvalue σ of S belongs to 1/σ − 1 of L.
 */
export class GainLoci {
  readonly steps: LocusStep[] = [];
  /** At zero frequency and half the frequency of the cycle, where every value is real or one of a conjugate pair. */
  readonly ends: Spectrum[] = [];
  private readonly response: (frequency: number) => Complex[][];

  /**
   * @param sensitivity S of a stable loop.
   * @param features poles of L and S, z − 1, near which the steps are short.
   */
  constructor(sensitivity: StateEquations, features: readonly Complex[]) {
    this.response = prepareResponseMatrix(sensitivity);
    const end = Math.PI / sensitivity.period!;
    let before = this.spectrum(0);
    this.ends.push(before);
    for (const frequency of [...frequencyGrid(features, sensitivity.period), end]) {
      const here = this.spectrum(frequency);
      this.join(before, here, 0);
      before = here;
    }
    this.ends.push(before);
  }

  /**
   * The frequency within a step at which a real function of the locus is zero; it has different signs at the ends. The bracket
   * is narrowed together with the values at its ends, so that what is followed stays the same locus where others are near.
   */
  zeroWithin({ from, to }: LocusStep, of: (value: Complex) => number): LocusPoint {
    let [low, high] = [from, to];
    for (let round = 0; round < mostRounds; round++) {
      const [below, above] = [of(low.value), of(high.value)];
      const straight = below / (below - above);
      const share = round % 3 === 2 ? 0.5 : Math.min(Math.max(straight, 1e-3), 1 - 1e-3);
      const frequency = low.frequency + share * (high.frequency - low.frequency);
      if (!(frequency > low.frequency && frequency < high.frequency)) break;
      const expected = between(low.value, high.value, share);
      const { values } = this.spectrum(frequency);
      const value = values.reduce((best, one) => (apart(one, expected) < apart(best, expected) ? one : best));
      if (of(value) === 0) return { frequency, value };
      if (of(value) < 0 === below < 0) low = { frequency, value };
      else high = { frequency, value };
      if (high.frequency - low.frequency <= narrowest * high.frequency) break;
    }
    return Math.abs(of(low.value)) < Math.abs(of(high.value)) ? low : high;
  }

  /** Where an eigenvalue is of size one. */
  ofSizeOne(): LocusPoint[] {
    const excess = ({ real, imaginary }: Complex): number => Math.hypot(real, imaginary) - 1;
    return this.steps
      .filter(({ from, to }) => excess(from.value) * excess(to.value) < 0)
      .map((step) => this.zeroWithin(step, excess));
  }

  private spectrum(frequency: number): Spectrum {
    return { frequency, values: complexEigenvalues(this.response(frequency)).map(loopValue) };
  }

  private join(before: Spectrum, after: Spectrum, depth: number): void {
    const matched = matchedTo(before.values, after.values);
    const far = before.values.some((value, i) => {
      const moved = relativelyApart(value, matched[i]);
      if (moved > farthest) return true;
      const others = after.values.filter(
        (other) =>
          relativelyApart(value, other) < plainly * moved && relativelyApart(other, matched[i]) > coinciding,
      );
      // Which of several it goes on in tells nothing where none is on another side of what margins are read from.
      return others.length > 0 && !onOneSide([value, matched[i], ...others]);
    });
    if (far && depth < mostHalvings) {
      const middle = this.spectrum((before.frequency + after.frequency) / 2);
      this.join(before, middle, depth + 1);
      this.join(middle, after, depth + 1);
      return;
    }
    before.values.forEach((value, i) => {
      if (isUnbounded(value) || isUnbounded(matched[i])) return;
      this.steps.push({
        from: { frequency: before.frequency, value },
        to: { frequency: after.frequency, value: matched[i] },
      });
    });
  }
}

/** Stands for a loop gain without bound, at a pole of L. */
const unbounded = { real: 1e300, imaginary: 0 };

function loopValue({ real, imaginary }: Complex): Complex {
  const square = real * real + imaginary * imaginary;
  return square > 0 ? { real: real / square - 1, imaginary: -imaginary / square } : unbounded;
}

/** For each of the values the one that follows it: the nearest pairs first. */
function matchedTo(values: readonly Complex[], next: readonly Complex[]): Complex[] {
  const pairs = values
    .flatMap((value, i) => next.map((other, j) => ({ i, j, distance: relativelyApart(value, other) })))
    .sort((a, b) => a.distance - b.distance);
  const result: (Complex | undefined)[] = values.map(() => undefined);
  const taken = new Set<number>();
  for (const { i, j } of pairs) {
    if (result[i] !== undefined || taken.has(j)) continue;
    result[i] = next[j];
    taken.add(j);
  }
  return result as Complex[];
}

/** Whether all are on one side of the real axis and on one side of the circle of radius one. */
function onOneSide(values: readonly Complex[]): boolean {
  const [first] = values;
  const [above, outside] = [first.imaginary > 0, Math.hypot(first.real, first.imaginary) > 1];
  return values.every(
    ({ real, imaginary }) => imaginary > 0 === above && Math.hypot(real, imaginary) > 1 === outside,
  );
}

function between(a: Complex, b: Complex, share: number): Complex {
  return {
    real: a.real + share * (b.real - a.real),
    imaginary: a.imaginary + share * (b.imaginary - a.imaginary),
  };
}

function apart(a: Complex, b: Complex): number {
  return Math.hypot(a.real - b.real, a.imaginary - b.imaginary);
}

/** Beyond this size a value is at a pole of the loop, and its angle is rounding. */
const largestMattering = 1e10;

/**
 * Values far below one never matter to a margin, so that their distance counts against one part in a thousand; nor do values
 * without bound, as those of an integrator near zero frequency, which are all one.
 */
function relativelyApart(a: Complex, b: Complex): number {
  if (isUnbounded(a) && isUnbounded(b)) return 0;
  return apart(a, b) / (1e-3 + Math.hypot(a.real, a.imaginary) + Math.hypot(b.real, b.imaginary));
}

function isUnbounded({ real, imaginary }: Complex): boolean {
  return Math.hypot(real, imaginary) > largestMattering;
}
