import { smallestCommonDelay } from './common_delay.js';
import { DelayCurves } from './delay_curves.js';
import { GainLoci } from './gain_loci.js';
import { liftedSensitivity } from './lifted_response.js';
import { identity, multiply, place, zeros } from './matrix.js';
import { NumericFailure } from './numeric_failure.js';
import { areStable, polesOf } from './poles.js';
import { separateLoops } from './separate_loops.js';
import type { StateEquations } from './state_equations.js';

/**
 * The smallest delay τ in s of all changes of a signal, or of several signals alike, that brings the loop to the edge of stability. With a delay, each of
 * the frequencies ω = θ + 2πm/(KT) that are the same at the ends of a cycle, |ω| ≤ π/T, is turned by e^{−jωτ}, so that a delay of
 * whole changes is exact; the edge is where L(θ)·X(θ, τ) has the eigenvalue −1, X being that turn. At π/T itself, where a sine
 * is its own image and turned both ways, cos(πτ/T) is left of it. Of a loop that is the same at every sample the smallest τ is
 * that of (π + arg L)/ω.
 *
 * From every place where an eigenvalue of L is of size one the curve is followed on which one of L·X is. Poles then tell
 * whether the loop is stable with less delay, of whole changes; where it is not, curves are followed from those delays too.
 * @param loop L, lifted, of a stable closed loop; its inputs are the values of one signal, or of several that change equally
 * often in a cycle, one after the other.
 * @param loci of its eigenvalues.
 * @param signals how many there are.
 * @throws NumericFailure when a curve cannot be followed, or the loop is found unstable with less delay all the same.
 */
export function smallestDelay(loop: StateEquations, loci: GainLoci, signals: number): number {
  if (loop.b.columns === signals) return smallestCommonDelay(loci, loop.period!);
  const changes = loop.b.columns / signals;
  // Equal loops that know nothing of one another have equal eigenvalues, whose curves could not be told apart.
  const parts = separateLoops(loop, signals);
  if (parts.length > 1) {
    return Math.min(...parts.map((part) => smallestDelay(part, lociOf(part), part.b.columns / changes)));
  }
  const curves = new DelayCurves(liftedSensitivity(loop), signals);
  let least = firstEdge(curves, loci, 0, [1], curves.atRealFrequencies());
  if (unstableWithLess(loop, least, signals) === undefined) return least;
  for (let delay = 1; delay <= changes; delay++) {
    least = firstEdge(curves, lociOf(delayedLoop(loop, delay * signals)), delay, [1, -1], least);
  }
  const unstable = unstableWithLess(loop, least, signals);
  if (unstable === undefined) return least;
  throw new NumericFailure(
    `the delay that brings the loop to the edge of stability was not proved: ${least} s was found, but the loop is unstable with ${(unstable * loop.period!) / changes} s already`,
  );
}

function firstEdge(
  curves: DelayCurves,
  loci: GainLoci,
  delay: number,
  ways: readonly (1 | -1)[],
  known: number,
): number {
  let least = known;
  for (const crossing of loci.ofSizeOne()) {
    for (const way of ways) least = Math.min(least, curves.firstEdge(crossing, delay, way, least));
  }
  return least;
}

function lociOf(loop: StateEquations): GainLoci {
  const sensitivity = liftedSensitivity(loop);
  return new GainLoci(
    sensitivity,
    [loop, sensitivity].flatMap(({ a, period }) => polesOf(a, period)),
  );
}

/** Farther than this poles are not asked, which then are too many to be exact. */
const mostKept = 150;
const fewer = 4;

/**
 * A number of whole changes by which each signal may be late before a delay is reached, but with which the loop is unstable:
 * of all up to a cycle, and of some more up to the delay.
 */
function unstableWithLess(loop: StateEquations, delay: number, signals: number): number | undefined {
  const changes = loop.b.columns / signals;
  // At the edge itself poles may tell either.
  const whole = Math.min(Math.ceil((delay * changes * (1 - 1e-9)) / loop.period!) - 1, mostKept);
  const first = Array.from({ length: Math.max(0, Math.min(changes, whole)) }, (_, k) => k + 1);
  const later = Array.from({ length: fewer }, (_, k) => Math.round(((k + 1) * whole) / fewer));
  return [...first, ...later.filter((k) => k > changes)].find((k) => {
    const { a, period } = liftedSensitivity(delayedLoop(loop, k * signals));
    return !areStable(polesOf(a, period), period);
  });
}

/** A lifted loop with every change delayed by so many of all changes, at least one. */
export function delayedLoop({ a, b, c, d, period }: StateEquations, delay: number): StateEquations {
  const n = a.rows;
  const changes = b.columns;
  const cycles = Math.ceil(delay / changes);
  // What returned in the last cycles, the latest first, each in the order of time.
  const kept = cycles * changes;
  const now = zeros(changes, changes);
  const output = zeros(changes, n + kept);
  for (let i = 0; i < changes; i++) {
    const at = i - delay;
    if (at >= 0) {
      now.data[i * changes + at] = 1;
      continue;
    }
    const cycle = Math.ceil(-at / changes);
    output.data[i * (n + kept) + n + (cycle - 1) * changes + at + cycle * changes] = 1;
  }
  place(output, multiply(now, c), 0, 0);
  const moved = zeros(n + kept, n + kept);
  const entered = zeros(n + kept, changes);
  place(moved, a, 0, 0);
  place(moved, c, n, 0);
  place(moved, identity(kept - changes), n + changes, n);
  place(entered, b, 0, 0);
  place(entered, d, n, 0);
  return { a: moved, b: entered, c: output, d: multiply(now, d), period };
}
