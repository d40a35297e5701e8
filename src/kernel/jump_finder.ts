import type { CompiledLoop } from './compile.js';
import { finestShare, type Movement } from './movement.js';

/** A relay that switches more often than this in one step is followed by whole steps only. */
const mostJumps = 100;
/** At one moment one jump may bring about another so many times. */
const mostRounds = 20;

/** Moves a plant so that a relay that switches, or a stop that is reached, ends the step there. */
export class JumpFinder {
  private readonly before: Float64Array;
  private found = 0;
  /** From where the last move ended to just after its jump, as a share of the step; 0 where it had none. */
  private beyond = 0;

  constructor(
    private readonly compiled: CompiledLoop,
    private readonly movement: Movement,
  ) {
    this.before = new Float64Array(compiled.loop.states.length);
  }

  /** Starts to count jumps anew. */
  newStep(): void {
    this.found = 0;
  }

  /**
   * Moves by at most the share `most` of a step of h (s), to just before the first jump.
   * @returns the share by which it moved, up to just after the jump.
   */
  move(m: Float64Array, h: number, most: number): number {
    const { compiled } = this;
    this.keep(m);
    const moved = this.movement.move(m, h, most);
    compiled.follow?.(m);
    this.beyond = 0;
    if (this.found >= mostJumps || compiled.jumps!(m) === 0) return moved;
    this.found++;
    this.goBack(m);
    let free = 0;
    for (let part = 0.5; part >= finestShare; part /= 2) {
      if (free + part < moved && this.isFree(m, h, part)) free += part;
    }
    this.beyond = finestShare;
    // Rounding may put the jump a little later on this way than on the one that found it.
    while (free + this.beyond < moved && this.isFree(m, h, this.beyond)) {
      this.goBack(m);
      this.beyond = Math.min(2 * this.beyond, moved - free);
    }
    return free + this.beyond;
  }

  /** Moves on to just after the jump that ended the last move, if one did. */
  cross(m: Float64Array, h: number): void {
    if (this.beyond > 0) this.go(m, h, this.beyond);
  }

  /** Lets everything jump that does at this moment. */
  settle(m: Float64Array): void {
    const { settle, jumps } = this.compiled;
    settle!(m);
    for (let round = 1; round < mostRounds && jumps!(m) !== 0; round++) settle!(m);
  }

  /** Moves by a share of the step if nothing jumps until there, and else stays. */
  private isFree(m: Float64Array, h: number, share: number): boolean {
    this.keep(m);
    this.go(m, h, share);
    if (this.compiled.jumps!(m) === 0) return true;
    this.goBack(m);
    return false;
  }

  private go(m: Float64Array, h: number, share: number): void {
    for (let left = share; left > 0; ) left -= this.movement.move(m, h, left);
    this.compiled.follow?.(m);
  }

  private keep(m: Float64Array): void {
    const { state } = this.compiled.layout;
    this.before.set(m.subarray(state, state + this.before.length));
  }

  private goBack(m: Float64Array): void {
    m.set(this.before, this.compiled.layout.state);
    this.compiled.follow?.(m);
  }
}
