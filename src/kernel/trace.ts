/**
 * One signal over time in pieces: piece i runs from `times[i]` to `times[i + 1]`, and its four numbers at 4·i are value and
 * rate at its start, value and rate at its end. Between them the cubic through all four (Hermite) stands for the signal;
 * from one piece to the next it may jump.
 */
export interface SignalTrace {
  times: Float64Array;
  record: Float64Array;
  pieces: number;
}

/** How a run ended. A trace ends early where a value leaves the finite numbers. */
export type RunEnd =
  | { kind: 'complete' }
  | { kind: 'overflow' | 'not_a_number'; time: number; state: string };

/** The traced signals of one plant in one scenario. The arrays are used again by the next run. */
export interface Run {
  times: Float64Array;
  records: Float64Array[];
  pieces: number;
  end: RunEnd;
}
