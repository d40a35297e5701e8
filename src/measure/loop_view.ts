import { extremeOverBand } from '../linear/band_extremes.js';
import { bandwidthOf } from '../linear/bandwidth.js';
import { complementaryOf } from '../linear/closed_loop.js';
import { type GainCrossing, gainCrossings } from '../linear/crossings.js';
import { type DiscMargin, discMarginOfLoop } from '../linear/disc_margin.js';
import { largestGain } from '../linear/largest_gain.js';
import { type LiftedMargins, liftedMargins } from '../linear/lifted_margins.js';
import { leastLiftedDamping } from '../linear/lifted_modes.js';
import { liftedResponse, liftedSensitivity } from '../linear/lifted_response.js';
import { analyseLoop } from '../linear/loop_analysis.js';
import type { LoopResponse } from '../linear/loop_response.js';
import { type LoopMargins, marginsOfLoop } from '../linear/margins.js';
import { type ClosedLoopDecay, closedLoopDecay } from '../linear/modes.js';
import type { Peak } from '../linear/peak.js';
import type { Band } from '../linear/proven_peak.js';
import { loopSeenAtOneFrequency, sineResponse } from '../linear/sine_response.js';
import type { StateEquations } from '../linear/state_equations.js';

/**
 * A loop opened at a signal or at several at once, of which measures take what they need: each result is worked out once. A
 * signal that changes more than once in a cycle of all controllers gives a lifted loop, and so do several signals, with one
 * input and output for each change of each signal.
 */
export class LoopView {
  private single: LoopMargins | undefined;
  private lifted: LiftedMargins | undefined;
  private disc: DiscMargin | undefined;
  private decay: ClosedLoopDecay | undefined;
  private seen: StateEquations | undefined;
  private crossings: GainCrossing[] | undefined;

  /**
   * @param equations the loop transfer L, −(returned / injected), over one cycle.
   * @param periods time between two changes of each opened signal, s.
   * @param noiseGain root-mean-square gain from noise at the loop point to the measure's `of`, SI; where it has one.
   */
  constructor(
    readonly equations: StateEquations,
    readonly noiseGain?: (() => number) | undefined,
    readonly periods: readonly number[] = [equations.period! / equations.b.columns],
  ) {}

  /** How often the opened signals change in a cycle of all controllers, all counted together. */
  get changes(): number {
    return this.equations.b.columns;
  }

  /** Time between two changes of the one signal, of several of the one that changes most often, s. */
  get period(): number {
    return Math.min(...this.periods);
  }

  /** Whether the closed loop is stable. */
  get stable(): boolean {
    return this.changes === 1 ? this.margins().stable : this.liftedMargins().stable;
  }

  /** Of a loop with one change a cycle. @throws NumericFailure as `marginsOfLoop`. */
  margins(): LoopMargins {
    this.single ??= marginsOfLoop(this.equations);
    return this.single;
  }

  /** Of a loop with several changes a cycle. @throws NumericFailure as `liftedMargins`. */
  liftedMargins(): LiftedMargins {
    this.lifted ??= liftedMargins(this.equations, this.periods.length);
    return this.lifted;
  }

  /** Of a loop with one change a cycle. @throws NumericFailure as `discMarginOfLoop`. */
  discMargin(): DiscMargin {
    this.disc ??= discMarginOfLoop(this.equations);
    return this.disc;
  }

  /** Of a loop with one change a cycle. @throws NumericFailure as `closedLoopDecay`. */
  closedLoopDecay(): ClosedLoopDecay {
    this.decay ??= closedLoopDecay(this.equations);
    return this.decay;
  }

  /** Damping ratio of the least damped mode of the closed loop. @throws NumericFailure as `leastLiftedDamping`. */
  leastDamping(): number {
    return this.changes === 1
      ? this.closedLoopDecay().dampingRatio
      : leastLiftedDamping(liftedSensitivity(this.equations));
  }

  /** Of one signal, or of several that change equally often, s. @throws NumericFailure as `smallestDelay`. */
  delayMargin(): number {
    return this.changes === 1 ? this.margins().delayMargin : this.liftedMargins().delayMargin;
  }

  /**
   * One response with the period of the signal: L, or where the signal changes several times in a cycle what is seen of it at
   * one frequency. @throws NumericFailure as `loopSeenAtOneFrequency`.
   */
  oneResponse(): StateEquations {
    this.seen ??=
      this.changes === 1 ? this.equations : loopSeenAtOneFrequency(liftedSensitivity(this.equations));
    return this.seen;
  }

  /** Frequencies in rad/s at which `oneResponse` is of size one, ascending. @throws NumericFailure as `analyseLoop`. */
  crossovers(): number[] {
    this.crossings ??=
      this.changes === 1
        ? this.margins().gainCrossings
        : gainCrossings(analyseLoop(this.oneResponse(), 0).sweep);
    return this.crossings.map(({ frequency }) => frequency);
  }

  /** Of the closed `oneResponse`, rad/s. @throws NumericFailure as `bandwidthOf`. */
  bandwidth(): number {
    return bandwidthOf(complementaryOf(this.oneResponse()));
  }

  /**
   * The extreme size of L, or the largest of a response of the closed loop: where the signal changes several times in a cycle,
   * the size of L is that of `oneResponse`, and of the closed loop the root-mean-square of all that a sine makes.
   * @param band rad/s.
   * @throws NumericFailure as `extremeOverBand`.
   */
  extremeOverBand(response: LoopResponse, which: 'largest' | 'smallest', band: Band): Peak {
    if (this.changes === 1 || response.open)
      return extremeOverBand(this.oneResponse(), response, which, band);
    return largestGain(sineResponse(liftedResponse(this.equations, response)), band);
  }
}
