import type { CompiledLoop } from './compile.js';
import type { Movement } from './movement.js';

/** A relay that switches more often than this in one step is followed by whole steps only. */
const mostJumps = 100;
/** The time of a jump is found to this share of a step. */
const resolution = 1e-12;

/** Moves a plant so that a relay that switches, or a stop that is reached, ends the step there. */
export class JumpFinder {
  private readonly before: Float64Array;
  private found = 0;
  /** From the start of the last move to just after its jump, s; undefined where it had none. */
  private beyond: number | undefined;

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
   * Moves by at most h (s), to just before the first jump.
   * @returns how far it moved, s, up to just after the jump.
   */
  move(m: Float64Array, h: number): number {
    const { compiled, before } = this;
    const { state } = compiled.layout;
    before.set(m.subarray(state, state + before.length));
    this.movement.move(m, h);
    this.beyond = undefined;
    if (this.found >= mostJumps || compiled.jumps!(m) === 0) return h;
    this.found++;
    let [free, jumped] = [0, h];
    while (jumped - free > resolution * h) {
      const middle = (free + jumped) / 2;
      this.again(m, middle);
      if (compiled.jumps!(m) === 0) free = middle;
      else jumped = middle;
    }
    this.again(m, free);
    this.beyond = jumped;
    return jumped;
  }

  /** Moves on to just after the jump that ended the last move. */
  cross(m: Float64Array): void {
    if (this.beyond !== undefined) this.again(m, this.beyond);
  }

  private again(m: Float64Array, h: number): void {
    m.set(this.before, this.compiled.layout.state);
    if (h > 0) this.movement.move(m, h);
  }
}
