import type { Complex } from './complex.js';
import { complexEigenvalues } from './complex_eigenvalues.js';
import { frequencyGrid } from './frequency_grid.js';
import { prepareResponseMatrix } from './response.js';
import { rootBetween } from './root_finding.js';
import type { StateEquations } from './state_equations.js';

/** The eigenvalues of a lifted loop transfer at one frequency (rad/s). */
interface Spectrum {
  frequency: number;
  values: Complex[];
}

/** One eigenvalue at two neighbouring frequencies. */
export interface LocusStep {
  from: { frequency: number; value: Complex };
  to: { frequency: number; value: Complex };
}

/** Neighbouring values of a locus differ by less than this share of their size, or are as near as the depth allows. */
const farthest = 0.2;
const mostHalvings = 12;

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

  /** The frequency within a step at which a real function of the locus is zero; it has different signs at the ends. */
  zeroWithin({ from, to }: LocusStep, of: (value: Complex) => number): { frequency: number; value: Complex } {
    const valueAt = (frequency: number): Complex => {
      const share = (frequency - from.frequency) / (to.frequency - from.frequency);
      const expected = {
        real: from.value.real + share * (to.value.real - from.value.real),
        imaginary: from.value.imaginary + share * (to.value.imaginary - from.value.imaginary),
      };
      const { values } = this.spectrum(frequency);
      return values.reduce((best, value) => (apart(value, expected) < apart(best, expected) ? value : best));
    };
    const atEnds = new Map([
      [from.frequency, from.value],
      [to.frequency, to.value],
    ]);
    const frequency = rootBetween((x) => of(atEnds.get(x) ?? valueAt(x)), from.frequency, to.frequency);
    return { frequency, value: valueAt(frequency) };
  }

  private spectrum(frequency: number): Spectrum {
    return { frequency, values: complexEigenvalues(this.response(frequency)).map(loopValue) };
  }

  private join(before: Spectrum, after: Spectrum, depth: number): void {
    const matched = matchedTo(before.values, after.values);
    const far = before.values.some((value, i) => relativelyApart(value, matched[i]) > farthest);
    if (far && depth < mostHalvings) {
      const middle = this.spectrum((before.frequency + after.frequency) / 2);
      this.join(before, middle, depth + 1);
      this.join(middle, after, depth + 1);
      return;
    }
    before.values.forEach((value, i) => {
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

function apart(a: Complex, b: Complex): number {
  return Math.hypot(a.real - b.real, a.imaginary - b.imaginary);
}

/** Values far below one never matter to a margin, so that their distance counts against one part in a thousand. */
function relativelyApart(a: Complex, b: Complex): number {
  return apart(a, b) / (1e-3 + Math.hypot(a.real, a.imaginary) + Math.hypot(b.real, b.imaginary));
}
