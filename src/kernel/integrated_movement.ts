import type { Matrix } from '../linear/matrix.js';
import { NumericFailure } from '../linear/numeric_failure.js';
import type { CompiledLoop } from './compile.js';

/** The speed of the plant against a step that is allowed; less the more often the steps are halved. */
const mostSpeed = 1;
/** The error of a step of the stiff method that is allowed, against how far a state has come, before the first halving. */
const mostError = 1e-4;
/** Less than this cannot be told from rounding. */
const leastError = 1e-10;
/** No step becomes a smaller share than this of what was planned. */
const leastShare = 2 ** -30;
/** In more parts than these no planned step is taken. */
const mostParts = 2 ** 16;
/** After so many steps of the stiff method the other one is tried again. */
const stiffRun = 16;
/** Rates smaller than this against their terms are rounding. */
const rounding = 1e-12;
const tooLarge = 1e100;

/**
 * Movement of one nonlinear plant by small steps. What is planned from the start of the trace may be too long later on: a step
 * during which the plant turns out to be fast is taken by the stiff method if that is exact enough, and else in parts.
 */
export class IntegratedMovement {
  private readonly origin: Float64Array;
  private readonly inverse: Float64Array;
  private readonly reach: Float64Array;
  private readonly error: Float64Array;
  private readonly before: Float64Array;
  private readonly speed: number;
  private readonly exactness: number;
  /** No step is longer, s: the last one that was good, or twice that. */
  private longest = Number.POSITIVE_INFINITY;
  /** Of the planned step so far. */
  private parts = 0;
  /** Steps of the stiff method still to come before the other is tried. */
  private stiffLeft: number;

  /** @param slopes of the rates in the states at the start, 1/s. */
  constructor(
    private readonly compiled: CompiledLoop,
    start: Float64Array,
    slopes: Matrix,
    { stiff, halvings }: { stiff: boolean; halvings: number },
  ) {
    const { layout, loop } = compiled;
    const n = loop.states.length;
    this.origin = start.slice(layout.state, layout.state + n);
    this.inverse = Float64Array.from(this.origin, (_, i) => {
      let terms = 0;
      for (let j = 0; j < n; j++) terms += Math.abs(slopes.data[i * n + j] * this.origin[j]);
      return 1 / (rounding * terms + 1e-200);
    });
    this.reach = new Float64Array(n);
    this.error = new Float64Array(n);
    this.before = new Float64Array(n);
    this.speed = mostSpeed / 2 ** halvings;
    this.exactness = Math.max(leastError, mostError / 16 ** halvings);
    this.stiffLeft = stiff ? Number.POSITIVE_INFINITY : 0;
  }

  /**
   * Moves by at most the share `most` of a step of h (s), and returns by which.
   * @throws NumericFailure where the plant is too fast for any number of steps that could be waited for.
   */
  move(m: Float64Array, h: number, most: number): number {
    this.parts = most === 1 ? 0 : this.parts + 1;
    if (this.parts > mostParts) {
      throw new NumericFailure(
        `the plant is so fast that one step of ${h.toPrecision(3)} s was cut into more than ${mostParts} parts`,
      );
    }
    for (let share = this.fitting(h, most); ; share /= 2) {
      const last = share <= leastShare;
      if (this.moved(m, h * share, last)) return last && !this.isFinite(m) ? most : share;
      this.longest = (h * share) / 2;
    }
  }

  /** The largest part of the share that is no longer than the last good step. */
  private fitting(h: number, most: number): number {
    let share = most;
    while (h * share > this.longest && share > leastShare) share /= 2;
    return share;
  }

  private moved(m: Float64Array, h: number, anyhow: boolean): boolean {
    if (this.stiffLeft === 0) {
      const speed = this.compiled.step(m, h, this.inverse, anyhow ? Number.POSITIVE_INFINITY : this.speed);
      if (speed <= this.speed || anyhow) {
        if (speed < this.speed / 4) this.longest *= 2;
        return true;
      }
    }
    return this.movedStiffly(m, h, anyhow);
  }

  private movedStiffly(m: Float64Array, h: number, anyhow: boolean): boolean {
    const { compiled, before, error } = this;
    const { state } = compiled.layout;
    before.set(m.subarray(state, state + before.length));
    const worst = compiled.stiffStep(m, h, error) ? this.worstError(m) : Number.NaN;
    if (anyhow && Number.isNaN(worst)) {
      throw new NumericFailure(
        'a step of the integration has no solution: the rates or their slopes are not finite',
      );
    }
    if (!(worst <= this.exactness) && !anyhow) {
      m.set(before, state);
      return false;
    }
    this.stiffLeft = this.stiffLeft === 0 ? stiffRun : this.stiffLeft - 1;
    if (worst < this.exactness / 32) this.longest *= 2;
    return true;
  }

  /** Of the last step of the stiff method, against how far each state has come since the start. */
  private worstError(m: Float64Array): number {
    const { origin, before, reach, error } = this;
    let worst = 0;
    for (let i = 0; i < reach.length; i++) {
      const now = m[this.compiled.layout.state + i];
      const far = Math.max(reach[i], Math.abs(before[i] - origin[i]), Math.abs(now - before[i]));
      if (far > 0) worst = Math.max(worst, Math.abs(error[i]) / far);
      if (far < tooLarge) reach[i] = Math.max(reach[i], Math.abs(before[i] - origin[i]));
    }
    return worst;
  }

  private isFinite(m: Float64Array): boolean {
    const { state } = this.compiled.layout;
    return m.subarray(state, state + this.origin.length).every((value) => Math.abs(value) < tooLarge);
  }
}
