/** A closed-loop response (loopWeight·L + unitWeight)/(1 + L) of a loop transfer L. */
export interface ClosedLoopRatio {
  loopWeight: number;
  unitWeight: number;
}

/** A response of a loop: `open` without closing it, loopWeight·L + unitWeight. */
export type LoopResponse = ClosedLoopRatio & { open?: boolean };

/** 1/(1 + L) */
export const SENSITIVITY: ClosedLoopRatio = { loopWeight: 0, unitWeight: 1 };
/** L/(1 + L) */
export const COMPLEMENTARY: ClosedLoopRatio = { loopWeight: 1, unitWeight: 0 };
/** 1/(1 + L) − 1/2 */
export const BALANCED: ClosedLoopRatio = { loopWeight: -0.5, unitWeight: 0.5 };
/** The loop transfer L itself. */
export const LOOP_GAIN: LoopResponse = { loopWeight: 1, unitWeight: 0, open: true };
