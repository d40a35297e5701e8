/** How a run ended. A trace ends early where a value leaves the finite numbers. */
export type RunEnd =
  | { kind: 'complete' }
  | { kind: 'overflow' | 'not_a_number'; time: number; state: string };

/**
 * The recorded signals of one plant in one scenario, in pieces: piece i runs from `times[i]` to `times[i + 1]` (s), and in
 * each record the four numbers at 4·i are value and rate at its start, value and rate at its end. From one piece to the next a
 * signal may jump. The arrays are used again by the next run.
 */
export interface Run {
  times: Float64Array;
  records: Float64Array[];
  pieces: number;
  end: RunEnd;
  /** Arrays for what is made of the records, used again by the next run too. */
  lend: (length: number) => Float64Array;
}
