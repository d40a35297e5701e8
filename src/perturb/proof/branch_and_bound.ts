import type { Interval } from './interval.js';

/** What a proof over a box came to. */
export type ProofResult =
  | { kind: 'proved'; boxes: number }
  /** A point of the box at which the statement is false. */
  | { kind: 'refuted'; boxes: number; at: number[] }
  /** On this share of the box's volume it is neither proved nor refuted. */
  | { kind: 'open'; boxes: number; openShare: number };

/** A statement about every point of a box. */
export interface BoxStatement {
  /** Whether it is proved for all points of a box; false where that is not so or cannot be told. */
  holdsOn(box: readonly Interval[]): boolean;
  /** Whether it is false at a point. Asked for the centres of boxes that could not be proved. */
  failsAt(point: readonly number[]): boolean;
  /** Along which variable to halve a box that could not be proved. */
  cut(box: readonly Interval[]): number;
  /** How many plain boxes a look at this one cost; one where not given. */
  work?(box: readonly Interval[]): number;
}

/**
 * Proves a statement on a box by halving what cannot be proved at once (branch and bound; Moore 1966), the largest box
 * first, until all is proved, a point is found where it is false, or what is left is more than the budget allows.
 * @param budget how many plain boxes may be looked at; the result depends on nothing else.
 */
export function proveOn(box: readonly Interval[], statement: BoxStatement, budget: number): ProofResult {
  let open: { box: readonly Interval[]; share: number }[] = [{ box, share: 1 }];
  let boxes = 0;
  let spent = 0;
  while (open.length > 0) {
    const next: typeof open = [];
    for (const [at, one] of open.entries()) {
      // Each box that is left takes a look at least.
      if (spent + (open.length - at) + next.length > budget) {
        const left = [...open.slice(at), ...next];
        return { kind: 'open', boxes, openShare: left.reduce((sum, { share }) => sum + share, 0) };
      }
      boxes++;
      const holds = statement.holdsOn(one.box);
      spent += statement.work?.(one.box) ?? 1;
      if (holds) continue;
      const centre = one.box.map(([low, high]) => low + (high - low) / 2);
      if (statement.failsAt(centre)) return { kind: 'refuted', boxes, at: centre };
      next.push(
        ...halves(one.box, statement.cut(one.box)).map((half) => ({ box: half, share: one.share / 2 })),
      );
    }
    open = next;
  }
  return { kind: 'proved', boxes };
}

function halves(box: readonly Interval[], index: number): Interval[][] {
  const [low, high] = box[index];
  const middle = low + (high - low) / 2;
  return [
    box.map((one, i): Interval => (i === index ? [low, middle] : one)),
    box.map((one, i): Interval => (i === index ? [middle, high] : one)),
  ];
}
