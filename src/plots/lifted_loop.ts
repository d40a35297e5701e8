import type { Complex } from '../linear/complex.js';
import { GainLoci, type LocusStep } from '../linear/gain_loci.js';
import { liftedSensitivity } from '../linear/lifted_margins.js';
import { polesOf } from '../linear/poles.js';
import { prepareResponseMatrix } from '../linear/response.js';
import type { LoopView } from '../measure/loop_view.js';
import { formatHeadroom, formatResultShort } from '../report/format_value.js';
import type { LiftedLoop, Locus, LocusMark } from '../report/index.js';
import { limitNumbers } from '../report/requirement_in_words.js';
import type { RequirementRun } from '../verdict/run.js';
import { valuesOfPlant } from './plant_values.js';
import { times, waveOver } from './wave.js';

/** The part of the plane about −1 that is worth drawing, and the way from one point of a locus to the next. */
const farthest = 20;
const apartInPicture = 0.015;

/**
 * A loop whose signal changes K times in a cycle T as the frequency response of its signal shows it: 1/s(ω) − 1, with
 * s = vᴴ·S·v the part of the same frequency that the signal has of a wave added to it, the loop closed, and v a wave over the
 * changes. Such a loop makes other frequencies too, so that margins are not read from it.
 */
export function seenAtOneFrequency({ equations, changes, period }: LoopView): (frequency: number) => Complex {
  const matrixAt = prepareResponseMatrix(liftedSensitivity(equations));
  return (frequency) => {
    const wave = waveOver(changes, frequency * period);
    const seen = times(matrixAt(frequency), wave)
      .map(({ real, imaginary }, i) => ({
        real: real * wave[i].real + imaginary * wave[i].imaginary,
        imaginary: imaginary * wave[i].real - real * wave[i].imaginary,
      }))
      .reduce((sum, one) => ({ real: sum.real + one.real, imaginary: sum.imaginary + one.imaginary }));
    const square = seen.real ** 2 + seen.imaginary ** 2;
    return { real: seen.real / square - 1, imaginary: -seen.imaginary / square };
  };
}

/** The loci of a lifted loop's eigenvalues, and where the gain and phase margins of requirements are read from them. */
export function liftedLoop(
  runs: readonly RequirementRun[],
  { nominal, latched, worst }: { nominal: LoopView; latched: LoopView | undefined; worst: LoopView },
): LiftedLoop {
  const loci = { nominal: lociOf(nominal), worst: lociOf(worst) };
  return {
    changes: nominal.changes,
    ...loci,
    ...(latched && { latched: lociOf(latched) }),
    marks: runs.flatMap((run) => markOf(run, loci, runs[0])),
  };
}

function lociOf({ equations }: LoopView): Locus[] {
  const sensitivity = liftedSensitivity(equations);
  const features = [sensitivity, equations].flatMap(({ a, period }) => polesOf(a, period));
  const above = chained(new GainLoci(sensitivity, features).steps).map(thinned);
  return [...above, ...above.map(mirrored)];
}

/** Steps joined where one begins with the very value that another ends with. */
function chained(steps: readonly LocusStep[]): Complex[][] {
  const endingIn = new Map<Complex, Complex[]>();
  const loci: Complex[][] = [];
  for (const { from, to } of steps) {
    if (![from, to].every(({ value }) => Math.hypot(value.real, value.imaginary) <= farthest)) continue;
    let locus = endingIn.get(from.value);
    if (!locus) {
      locus = [from.value];
      loci.push(locus);
    }
    endingIn.delete(from.value);
    locus.push(to.value);
    endingIn.set(to.value, locus);
  }
  return loci;
}

/** At negative frequencies, where the loci go on. */
function mirrored(locus: Locus): Locus {
  return locus.map(({ real, imaginary }) => ({ real, imaginary: -imaginary }));
}

function thinned(locus: readonly Complex[]): Locus {
  const kept = [locus[0]];
  for (const point of locus) {
    if (apart(point, kept[kept.length - 1]) >= apartInPicture) kept.push(point);
  }
  return [...kept, locus[locus.length - 1]];
}

/** The nominal plant's numbers where the requirement's worst plant is not the one that is drawn. */
function markOf(
  run: RequirementRun,
  loci: Record<'nominal' | 'worst', Locus[]>,
  drawn: RequirementRun,
): LocusMark[] {
  const isDrawn = valuesOfPlant(run.worst).join() === valuesOfPlant(drawn.worst).join();
  const curve = isDrawn ? 'worst' : 'nominal';
  const { result, headroom } = run[curve];
  if (result.kind !== 'value' || !Number.isFinite(result.value)) return [];
  const kind = run.measure === 'gain_margin' ? 'gain' : run.measure === 'phase_margin' ? 'phase' : undefined;
  if (!kind) return [];
  const at = nearestTo(loci[curve], kind === 'gain' ? onAxis(result.value) : onCircle(result.value));
  const number = formatResultShort(result, run, limitNumbers(run.limit));
  const text = `${curve} ${number}, headroom ${formatHeadroom(headroom)}`;
  return [{ requirement: run.name, kind, curve, at, text }];
}

/** A factor on the gain, up or down, brings one of these to −1. */
function onAxis(ratio: number): Complex[] {
  return [1 / ratio, ratio].map((size) => ({ real: -size, imaginary: 0 }));
}

/** A turn by this angle, either way, brings one of these to −1; the upper one comes first, for loci have both. */
function onCircle(angle: number): Complex[] {
  return [-angle, angle].map((turn) => ({ real: -Math.cos(turn), imaginary: -Math.sin(turn) }));
}

/** That of some places which lies nearest to a locus. */
function nearestTo(loci: readonly Locus[], places: readonly Complex[]): Complex {
  const distance = (place: Complex): number =>
    loci.flat().reduce((least, point) => Math.min(least, apart(point, place)), Number.POSITIVE_INFINITY);
  return places.reduce((best, place) => (distance(place) < distance(best) ? place : best));
}

function apart(a: Complex, b: Complex): number {
  return Math.hypot(a.real - b.real, a.imaginary - b.imaginary);
}
